/** A browser may show these on the store's own address; anything else could carry a script. */
const SHOWN_IN_PLACE = new Set(["image/jpeg", "image/png", "image/webp", "image/avif", "image/gif", "application/pdf", "model/gltf-binary"]);

const LONGEST_NAME = 150;

/**
 * The header that names a download (RFC 6266), whatever a person called the file.
 *
 * @param filename as it was given; folders, control and direction-changing characters are taken out
 * @param inline asks to show it in place; kept only for kinds that can't run a script
 */
export function contentDisposition({ filename, contentType, inline }: { filename: string; contentType: string; inline: boolean }): string {
  const kind = inline && SHOWN_IN_PLACE.has(contentType) ? "inline" : "attachment";
  const name = cleanName(filename);
  const plain = name.normalize("NFKD").replace(/[^\x20-\x7e]/g, "").replace(/["\\%]/g, "_").trim() || "file";
  // RFC 5987 attr-char is narrower than what encodeURIComponent leaves alone.
  const encoded = encodeURIComponent(name).replace(/['()*]/g, (c) => `%${c.charCodeAt(0).toString(16).toUpperCase()}`);
  return `${kind}; filename="${plain}"; filename*=UTF-8''${encoded}`;
}

function cleanName(filename: string): string {
  const last = filename.split(/[/\\]/).pop() ?? "";
  const name = last.replace(/[\p{Cc}\p{Cf}\p{Cs}\p{Zl}\p{Zp}]/gu, "").trim().replace(/^\.+/, "");
  const letters = [...name];
  if (letters.length <= LONGEST_NAME) return name || "file";
  // The ending tells the receiving program what it is.
  const ending = /\.[A-Za-z0-9]{1,8}$/.exec(name)?.[0] ?? "";
  return letters.slice(0, LONGEST_NAME - ending.length).join("") + ending;
}
