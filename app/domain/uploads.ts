/** What may be uploaded, and how large it may be. */
export type UploadKind = "step" | "stl" | "photo" | "pdf";

export const mediaTypes: Record<UploadKind, readonly string[]> = {
  step: ["model/step"],
  stl: ["model/stl"],
  photo: ["image/jpeg", "image/png", "image/webp"],
  pdf: ["application/pdf"],
};

/** S3 takes parts from 5 MiB (the last may be smaller), at most 10,000 of them. */
export const partBytes = 16 * 1024 * 1024;

export const partCount = (bytes: number) => Math.max(1, Math.ceil(bytes / partBytes));

const mb = 1024 * 1024;

export interface UploadLimits {
  modelMb: number;
  photoMb: number;
}

/** Why a file of this kind and size may not be uploaded; null when it may. */
export function refuseSize(kind: UploadKind, bytes: number, limits: UploadLimits): string | null {
  if (bytes <= 0) return "The file is empty.";
  const limit = kind === "photo" ? limits.photoMb : limits.modelMb;
  return bytes > limit * mb ? `The file is ${Math.ceil(bytes / mb)} MB; ${kind === "photo" ? "a photo" : "a file"} may have ${limit} MB.` : null;
}

const ascii = (head: Uint8Array, from: number, length: number) => String.fromCharCode(...head.subarray(from, from + length));

/**
 * What a file is by its first bytes, never by its name. The same question is asked in the
 * browser before an upload and on the server of the stored bytes.
 *
 * @param head the first 4 kB or the whole file
 * @param isStl whether the mesh core takes it for an STL
 */
export function kindOf(head: Uint8Array, isStl: "step" | "stl" | null): { kind: UploadKind; mediaType: string } | { refusal: string } {
  if (head[0] === 0xff && head[1] === 0xd8 && head[2] === 0xff) return { kind: "photo", mediaType: "image/jpeg" };
  if (ascii(head, 0, 8) === "\u0089PNG\r\n\u001a\n") return { kind: "photo", mediaType: "image/png" };
  if (ascii(head, 0, 4) === "RIFF" && ascii(head, 8, 4) === "WEBP") return { kind: "photo", mediaType: "image/webp" };
  if (ascii(head, 0, 5) === "%PDF-") return { kind: "pdf", mediaType: "application/pdf" };
  if (ascii(head, 4, 4) === "ftyp" && /^(hei|hev|mif|msf|avi)/.test(ascii(head, 8, 4))) {
    return { refusal: "HEIC photos can't be shown in every browser. Set the phone's camera to “most compatible”, or send the photo as JPEG." };
  }
  if (isStl === "step") return { kind: "step", mediaType: "model/step" };
  if (isStl === "stl") return { kind: "stl", mediaType: "model/stl" };
  return { refusal: "This is neither a STEP or STL model, a JPEG, PNG or WebP photo, nor a PDF." };
}
