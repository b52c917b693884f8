import type { InspectAnswer, InspectRequest } from "#app/components/upload/inspect-worker.ts";
import { refuseSize, type UploadLimits } from "#app/domain/uploads.ts";

export type InspectedPhoto = { ok: true; mediaType: string; sha256: string } | { ok: false; reason: string };

/** Looks at a picture from the camera before it is kept: what it is by its bytes, and its hash. */
export function inspectPhoto(file: File, limits: UploadLimits): Promise<InspectedPhoto> {
  return new Promise((resolve) => {
    const worker = new Worker(new URL("../upload/inspect-worker.ts", import.meta.url), { type: "module" });
    const end = (answer: InspectedPhoto) => {
      worker.terminate();
      resolve(answer);
    };
    worker.onerror = () => end({ ok: false, reason: "The photo can't be read. Take it again." });
    worker.onmessage = ({ data }: MessageEvent<InspectAnswer>) => {
      if (data.type === "progress") return;
      if (data.type === "refused") return end({ ok: false, reason: data.reason });
      const reason = data.kind === "photo" ? refuseSize("photo", file.size, limits) : "This is not a photo.";
      end(reason ? { ok: false, reason } : { ok: true, mediaType: data.mediaType, sha256: data.sha256 });
    };
    worker.postMessage({ file, unit: "mm" } satisfies InspectRequest);
  });
}
