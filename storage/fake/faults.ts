import { setTimeout as sleep } from "node:timers/promises";

/** What goes wrong on purpose. */
export type Effect =
  /** Answer 503 and do nothing. */
  | { kind: "unavailable" }
  /** Cut the connection after so many bytes of the body came; nothing is stored. */
  | { kind: "cut-request"; afterBytes: number }
  /** Cut the connection after so many bytes of the answer's body. */
  | { kind: "cut-answer"; afterBytes: number }
  /** Do it, have it on disk, and cut the connection without an answer. */
  | { kind: "lose-answer" }
  /** Wait before the request is looked at; then carry at most so many bytes a second. */
  | { kind: "slow"; delayMs?: number; bytesPerSecond?: number };

export interface Fault {
  effect: Effect;
  /** Of the S3 API, as "UploadPart"; any without one. */
  operation?: string;
  keyBeginsWith?: string;
  /** How many requests it meets, 1 without saying. */
  times?: number;
}

export type Faults = ReturnType<typeof plannedFaults>;

/** The connection ends here, and nothing more is said. */
export class Cut extends Error {}

export function plannedFaults() {
  const planned: Array<Fault & { left: number }> = [];
  return {
    add: (fault: Fault) => void planned.push({ ...fault, left: fault.times ?? 1 }),
    clear: () => void planned.splice(0),
    /** How many requests will still meet one. */
    left: () => planned.reduce((sum, { left }) => sum + left, 0),
    /** The fault that meets this request, if any; used up by it. */
    meet(operation: string, key: string): Effect | undefined {
      const at = planned.findIndex((fault) => (fault.operation ?? operation) === operation && key.startsWith(fault.keyBeginsWith ?? ""));
      const fault = planned[at];
      if (!fault) return undefined;
      fault.left -= 1;
      if (fault.left <= 0) planned.splice(at, 1);
      return fault.effect;
    },
  };
}

/** So many pieces a second make a line look slow all the time, not only at its end. */
const PIECES_PER_SECOND = 20;

/** The same bytes, cut off or slowed down. */
export async function* suffer(bytes: AsyncIterable<Uint8Array>, { cutAfter = Infinity, perSecond = Infinity }: { cutAfter?: number | undefined; perSecond?: number | undefined }): AsyncGenerator<Uint8Array> {
  let seen = 0;
  for await (const chunk of bytes) {
    if (seen + chunk.byteLength > cutAfter) {
      if (cutAfter > seen) yield chunk.subarray(0, cutAfter - seen);
      throw new Cut();
    }
    seen += chunk.byteLength;
    if (perSecond === Infinity) {
      yield chunk;
      continue;
    }
    const pieceBytes = Math.max(1, Math.floor(perSecond / PIECES_PER_SECOND));
    for (let from = 0; from < chunk.byteLength; from += pieceBytes) {
      const piece = chunk.subarray(from, from + pieceBytes);
      await sleep((piece.byteLength / perSecond) * 1000);
      yield piece;
    }
  }
  // An end that comes before the cut is one as well: the fault was asked for.
  if (cutAfter < Infinity) throw new Cut();
}
