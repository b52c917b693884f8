/// <reference lib="webworker" />
import { createSHA256 } from "hash-wasm";
import { kindOf, type UploadKind } from "#app/domain/uploads.ts";
import { UnreadableModel, type MeasureDocument } from "#app/geometry/measure-document.ts";
import { createStlMeasurer } from "#app/geometry/measure-stl.ts";
import { SNIFF_BYTES, sniffModel } from "#app/geometry/sniff-model.ts";

/** To the worker: look at this file. */
export interface InspectRequest {
  file: File;
  unit: "mm" | "in";
}

/** From the worker: how far it is, then what the file is. */
export type InspectAnswer =
  | { type: "progress"; share: number }
  | { type: "refused"; reason: string }
  | { type: "done"; kind: UploadKind; mediaType: string; sha256: string; measure: MeasureDocument | null; warning: string | null };

const scope = self as unknown as DedicatedWorkerGlobalScope;
const answer = (message: InspectAnswer) => scope.postMessage(message);

scope.onmessage = ({ data }: MessageEvent<InspectRequest>) => {
  inspect(data).catch((fault: unknown) => answer({ type: "refused", reason: fault instanceof Error ? fault.message : "The file can't be read." }));
};

// One pass over the file serves the hash and the measure; nothing of it is kept.
async function inspect({ file, unit }: InspectRequest): Promise<void> {
  const head = new Uint8Array(await file.slice(0, SNIFF_BYTES).arrayBuffer());
  const found = kindOf(head, sniffModel(head, file.size));
  if ("refusal" in found) return answer({ type: "refused", reason: found.refusal });

  const hash = await createSHA256();
  let measurer = found.kind === "stl" ? createStlMeasurer(file.size, { name: file.name, unit }) : null;
  let warning: string | null = null;
  let read = 0;
  let told = 0;
  const reader = file.stream().getReader();
  for (let piece = await reader.read(); !piece.done; piece = await reader.read()) {
    hash.update(piece.value);
    try {
      measurer?.push(piece.value);
    } catch (fault) {
      if (!(fault instanceof UnreadableModel)) throw fault;
      return answer({ type: "refused", reason: fault.message });
    }
    read += piece.value.length;
    if (read - told > file.size / 50) {
      told = read;
      answer({ type: "progress", share: read / file.size });
    }
  }
  const sha256 = hash.digest("hex");
  let measure: MeasureDocument | null = null;
  try {
    measure = measurer?.finish(sha256) ?? null;
  } catch (fault) {
    if (!(fault instanceof UnreadableModel)) throw fault;
    return answer({ type: "refused", reason: fault.message });
  } finally {
    measurer = null;
  }
  warning = measure?.warnings[0] ?? null;
  answer({ type: "done", kind: found.kind, mediaType: found.mediaType, sha256, measure, warning });
}
