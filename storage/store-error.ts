/**
 * Why the store did not do what was asked:
 * - `missing`: no such object, upload or bucket
 * - `exists`: there is an object at this key already and it was not to be replaced
 * - `refused`: the store does not accept the key or the signature
 * - `corrupted`: the bytes that arrived are not the bytes that were sent
 * - `invalid`: the store understood and declined, as a wrong part or a bad name
 * - `unreachable`: no answer, an answer cut off, or the store says it can't now; try again later
 */
export type StoreFault = "missing" | "exists" | "refused" | "corrupted" | "invalid" | "unreachable";

export class StoreError extends Error {
  readonly reason: StoreFault;

  constructor(reason: StoreFault, message: string, options?: { cause?: unknown }) {
    super(message, options);
    this.name = "StoreError";
    this.reason = reason;
  }
}

const byCode: Record<string, StoreFault> = {
  NoSuchKey: "missing",
  NoSuchBucket: "missing",
  NoSuchUpload: "missing",
  NotFound: "missing",
  PreconditionFailed: "exists",
  AccessDenied: "refused",
  InvalidAccessKeyId: "refused",
  SignatureDoesNotMatch: "refused",
  RequestTimeTooSkewed: "refused",
  BadDigest: "corrupted",
  XAmzContentSHA256Mismatch: "corrupted",
  RequestTimeout: "unreachable",
  SlowDown: "unreachable",
};

const NETWORK_CODES = new Set(["ECONNREFUSED", "ECONNRESET", "ECONNABORTED", "EPIPE", "ETIMEDOUT", "ENOTFOUND", "EAI_AGAIN", "EHOSTUNREACH", "ENETUNREACH", "ERR_STREAM_PREMATURE_CLOSE"]);

/** Translates whatever a call of the SDK threw; what is no fault of the store is thrown on as it is. */
export function storeErrorOf(error: unknown, doing: string): unknown {
  if (error instanceof StoreError || !(error instanceof Error)) return error;
  const { $metadata, code } = error as { $metadata?: { httpStatusCode?: number }; code?: string };
  const status = $metadata?.httpStatusCode;
  // A fault of the network has no status: the SDK passes on what the socket said.
  const network = status === undefined && (error.name === "TimeoutError" || NETWORK_CODES.has(code ?? ""));
  const reason = byCode[error.name] ?? (network ? "unreachable" : byStatus(status));
  return reason ? new StoreError(reason, `${doing}: ${error.name === "Error" ? (code ?? "") : error.name} ${error.message}`.trim(), { cause: error }) : error;
}

function byStatus(status: number | undefined): StoreFault | undefined {
  if (status === undefined) return undefined;
  if (status >= 500 || status === 429) return "unreachable";
  if (status === 404) return "missing";
  if (status === 412) return "exists";
  if (status === 403 || status === 401) return "refused";
  // An answer below 300 that the SDK could not read was cut off on its way.
  return status >= 400 ? "invalid" : "unreachable";
}
