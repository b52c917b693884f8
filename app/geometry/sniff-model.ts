const HEADER_BYTES = 80;
export const STL_HEAD_BYTES = 84;
export const STL_RECORD_BYTES = 50;
/** What `sniffModel` looks at: eighty triangle records are enough to tell triangles from noise. */
export const SNIFF_BYTES = 4096;

/**
 * What kind of model do these bytes hold, whatever the file is called?
 *
 * @param head the file, or at least its first `SNIFF_BYTES`
 * @param totalBytes size of the whole file when `head` is only its beginning
 * @returns "stl" also for an STL that turns out to be damaged (reading it then says why),
 *   null for anything that is neither STL nor STEP
 */
export function sniffModel(head: Uint8Array, totalBytes = head.length): "stl" | "step" | null {
  const word = firstWord(head);
  if (word.startsWith("iso-10303-21")) return "step";
  return isBinaryStl(head, totalBytes) || isTextStl(head) ? "stl" : null;
}

/** Triangles that a binary STL's header promises. */
export function promisedTriangles(head: Uint8Array): number {
  return new DataView(head.buffer, head.byteOffset, head.byteLength).getUint32(HEADER_BYTES, true);
}

/**
 * Is it a binary STL? The size decides where it fits the count, so that a header that begins with
 * "solid" does not mislead; where count and size disagree the records must look like triangles.
 */
export function isBinaryStl(head: Uint8Array, totalBytes: number): boolean {
  if (head.length < STL_HEAD_BYTES) return false;
  if (totalBytes === STL_HEAD_BYTES + promisedTriangles(head) * STL_RECORD_BYTES) return true;
  return !isText(head) && recordsLookLikeTriangles(head, STL_HEAD_BYTES);
}

/** Is it an ASCII STL: text whose first word, after blank lines and comments, opens a solid or a facet? */
export function isTextStl(head: Uint8Array): boolean {
  const word = firstWord(head);
  return (word === "solid" || word === "facet") && isText(head);
}

/**
 * Do whole records from `offset` on hold coordinates as parts have them? Noise does not: half of
 * all bit patterns lie outside 1e-20 … 1e20, and a record has nine of them. Records of zeros only
 * are padding, not triangles.
 */
export function recordsLookLikeTriangles(bytes: Uint8Array, offset: number): boolean {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const records = Math.min(20, Math.floor((bytes.length - offset) / STL_RECORD_BYTES));
  let nonZero = 0;
  for (let record = 0; record < records; record++) {
    for (let word = 3; word < 12; word++) {
      const size = Math.abs(view.getFloat32(offset + record * STL_RECORD_BYTES + word * 4, true));
      if (size === 0) continue;
      if (!(size > 1e-20 && size < 1e20)) return false;
      nonZero++;
    }
  }
  return nonZero > 0;
}

/** What is this that is not a model, and what to do instead? Null when it can't be told. */
export function commonMistake(head: Uint8Array): string | null {
  const starts = (...bytes: number[]) => bytes.every((byte, i) => head[i] === byte);
  if (starts(0xff, 0xfe) || starts(0xfe, 0xff)) return "it is text in UTF-16; save it as plain text (ASCII or UTF-8) or as binary STL";
  if (starts(0x50, 0x4b, 0x03, 0x04)) return "it is a ZIP archive (a 3MF is one too); unpack it, or export an STL";
  if (starts(0x25, 0x50, 0x44, 0x46)) return "it is a PDF; export the model itself as STL or STEP";
  if (starts(0x89, 0x50, 0x4e, 0x47) || starts(0xff, 0xd8, 0xff)) return "it is a picture; export the model itself as STL or STEP";
  if (starts(0x1f, 0x8b)) return "it is compressed (gzip); unpack it first";
  if (firstWord(head).startsWith("<")) return "it is a web page or XML; download or export the model again";
  return null;
}

function isText(head: Uint8Array): boolean {
  for (let i = 0; i < Math.min(head.length, SNIFF_BYTES); i++) {
    const byte = head[i]!;
    // Tab to carriage return, and the end-of-file mark old DOS programs write, are text.
    if (byte < 32 && (byte < 9 || byte > 13) && byte !== 0x1a) return false;
  }
  return true;
}

/** First word in lower case, at most 16 letters, after byte order mark, blanks and comments (# … and Part 21's). */
function firstWord(head: Uint8Array): string {
  const end = Math.min(head.length, SNIFF_BYTES);
  let i = head[0] === 0xef && head[1] === 0xbb && head[2] === 0xbf ? 3 : 0;
  for (;;) {
    while (i < end && head[i]! <= 32 && head[i] !== 0) i++;
    if (head[i] === 0x23) {
      while (i < end && head[i] !== 10 && head[i] !== 13) i++;
    } else if (head[i] === 0x2f && head[i + 1] === 0x2a) {
      i += 2;
      while (i < end && !(head[i] === 0x2a && head[i + 1] === 0x2f)) i++;
      i += 2;
    } else break;
  }
  let word = "";
  while (i < end && head[i]! > 32 && word.length < 16) word += String.fromCharCode(head[i++]!);
  return word.toLowerCase();
}
