import { createHash, createHmac, timingSafeEqual } from "node:crypto";
import { SignatureV4, getCanonicalHeaders, getSigningKey } from "@smithy/signature-v4";
import type { ChunkChain } from "./chunked-body.ts";
import { S3Fault } from "./s3-fault.ts";

export interface Keys {
  accessKeyId: string;
  secretAccessKey: string;
  region: string;
}

/** What the signature says about the body: its hash, nothing, or a framing. */
export type Payload =
  | { kind: "hashed"; sha256Hex: string }
  | { kind: "unsigned" }
  | { kind: "chunked"; chain: ChunkChain | undefined; trailer: boolean };

export interface Signed {
  method: string;
  /** Decoded path. */
  path: string;
  query: Record<string, string | string[]>;
  /** Names in lower case. */
  headers: Record<string, string>;
}

/** How far the clocks of client and store may be apart, as at S3. */
const SKEW_MS = 15 * 60 * 1000;
const LONGEST_PRESIGNED_S = 7 * 24 * 3600;
const EMPTY_SHA256 = "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855";
/** May come with a presigned request although they are not signed. */
const FREE_WHEN_PRESIGNED = new Set(["x-amz-content-sha256", "x-amz-user-agent"]);

type HttpRequest = Parameters<SignatureV4["presign"]>[0];

/** Node's hash in the shape that the library asks for. */
class Sha256 {
  readonly #hash: ReturnType<typeof createHash> | ReturnType<typeof createHmac>;

  constructor(secret?: string | ArrayBuffer | ArrayBufferView) {
    this.#hash = secret === undefined ? createHash("sha256") : createHmac("sha256", typeof secret === "string" ? secret : Buffer.from(secret as Uint8Array));
  }

  update(chunk: Uint8Array): void {
    this.#hash.update(chunk);
  }

  digest(): Promise<Uint8Array> {
    return Promise.resolve(this.#hash.digest());
  }

  reset(): void {
    throw new Error("made anew for every hash");
  }
}

interface Scope {
  longDate: string;
  scope: string;
  signingKey: Uint8Array;
}

/** Opens the library's steps from request to string to sign, for a request that is signed already. */
class Recomputation extends SignatureV4 {
  async signatureOf(request: HttpRequest, signedHeaders: Set<string>, payloadHash: string, { longDate, scope, signingKey }: Scope): Promise<string> {
    const canonical = this.createCanonicalRequest(request, getCanonicalHeaders(request, undefined, signedHeaders), payloadHash);
    return hmacHex(signingKey, await this.createStringToSign(longDate, scope, canonical, "AWS4-HMAC-SHA256"));
  }
}

const hmacHex = (key: Uint8Array, text: string) => createHmac("sha256", key).update(text).digest("hex");

function same(given: string, computed: string): boolean {
  const [a, b] = [Buffer.from(given), Buffer.from(computed)];
  return a.byteLength === b.byteLength && timingSafeEqual(a, b);
}

/** As every signer writes a path: each byte but letters, digits and `-._~/` in hexadecimal. */
const canonicalPath = (path: string) => encodeURIComponent(path).replace(/%2F/g, "/").replace(/[!'()*]/g, (c) => `%${c.charCodeAt(0).toString(16).toUpperCase()}`);

export function parseDate(longDate: string): number {
  const [, y, mo, d, h, mi, s] = /^(\d{4})(\d\d)(\d\d)T(\d\d)(\d\d)(\d\d)Z$/.exec(longDate) ?? [];
  return y === undefined ? NaN : Date.UTC(+y, +mo! - 1, +d!, +h!, +mi!, +s!);
}

/** The key that signs for a credential `ID/yyyymmdd/region/s3/aws4_request`. */
export async function openScope(credential: string, longDate: string, keys: Keys): Promise<Scope> {
  const [accessKeyId, date, region, service, ending, ...more] = credential.split("/");
  if (more.length > 0 || service !== "s3" || ending !== "aws4_request" || !date) throw new S3Fault("AuthorizationHeaderMalformed", "The credential must end with /s3/aws4_request.");
  if (accessKeyId !== keys.accessKeyId) throw new S3Fault("InvalidAccessKeyId", "The access key is not known here.");
  if (region !== keys.region) throw new S3Fault("AuthorizationHeaderMalformed", `The region '${region}' is wrong; expecting '${keys.region}'.`);
  if (!longDate.startsWith(date)) throw new S3Fault("AuthorizationHeaderMalformed", "The date of the credential is not the date of the request.");
  return { longDate, scope: `${date}/${region}/s3/aws4_request`, signingKey: await getSigningKey(Sha256, keys, date, region, "s3") };
}

/** Checks the signature of a text such as the policy of a form. */
export function checkText({ signingKey }: Scope, text: string, given: string): void {
  if (!same(given, hmacHex(signingKey, text))) throw new S3Fault("SignatureDoesNotMatch", "The signature does not match the one computed here.");
}

/**
 * Checks the signature (Signature Version 4) of a request, in its header or in its address.
 *
 * @param now milliseconds since 1970
 * @throws S3Fault when it is missing, wrong, too old or of another key
 */
export async function proveRequest(signed: Signed, keys: Keys, now: number): Promise<Payload> {
  if (signed.query["X-Amz-Algorithm"] !== undefined || signed.query["X-Amz-Signature"] !== undefined) return provePresigned(signed, keys, now);
  if (signed.headers.authorization !== undefined) return proveHeader(signed, keys, now);
  throw new S3Fault("AccessDenied", "The request is not signed.");
}

async function proveHeader(signed: Signed, keys: Keys, now: number): Promise<Payload> {
  const { authorization = "", "x-amz-date": longDate = "", "x-amz-content-sha256": payloadHash } = signed.headers;
  const [, credential, names, signature] = /^AWS4-HMAC-SHA256\s+Credential=([^,\s]+)\s*,\s*SignedHeaders=([^,\s]+)\s*,\s*Signature=([0-9a-f]+)$/.exec(authorization) ?? [];
  if (!credential || !names || !signature) throw new S3Fault("AuthorizationHeaderMalformed", "The Authorization header is not one of Signature Version 4.");
  const date = parseDate(longDate);
  if (Number.isNaN(date)) throw new S3Fault("AccessDenied", "x-amz-date must be given as yyyymmddThhmmssZ.");
  if (payloadHash === undefined) throw new S3Fault("InvalidRequest", "Missing required header for this request: x-amz-content-sha256");
  const scope = await openScope(credential, longDate, keys);
  await compare(signed, { names, signature, payloadHash, scope, free: new Set() });
  if (Math.abs(now - date) > SKEW_MS) throw new S3Fault("RequestTimeTooSkewed", "The clocks of client and store are too far apart.");
  return payloadOf(payloadHash, signature, scope);
}

async function provePresigned(signed: Signed, keys: Keys, now: number): Promise<Payload> {
  const one = (name: string) => {
    const value = signed.query[name];
    if (typeof value !== "string") throw new S3Fault("AuthorizationQueryParametersError", `${name} must be given once.`);
    return value;
  };
  if (one("X-Amz-Algorithm") !== "AWS4-HMAC-SHA256") throw new S3Fault("AuthorizationQueryParametersError", "X-Amz-Algorithm must be AWS4-HMAC-SHA256.");
  const longDate = one("X-Amz-Date");
  const date = parseDate(longDate);
  const seconds = /^\d{1,7}$/.test(one("X-Amz-Expires")) ? Number(one("X-Amz-Expires")) : NaN;
  if (Number.isNaN(date) || !(seconds >= 1 && seconds <= LONGEST_PRESIGNED_S)) throw new S3Fault("AuthorizationQueryParametersError", "X-Amz-Date or X-Amz-Expires is not usable.");
  const scope = await openScope(one("X-Amz-Credential"), longDate, keys);
  const inAddress = Object.entries(signed.query).find(([name]) => name.toLowerCase() === "x-amz-content-sha256")?.[1];
  const payloadHash = typeof inAddress === "string" ? inAddress : (signed.headers["x-amz-content-sha256"] ?? "UNSIGNED-PAYLOAD");
  await compare(signed, { names: one("X-Amz-SignedHeaders"), signature: one("X-Amz-Signature"), payloadHash, scope, free: FREE_WHEN_PRESIGNED });
  if (date - now > SKEW_MS) throw new S3Fault("AccessDenied", "Request is not yet valid");
  if (now > date + seconds * 1000) throw new S3Fault("AccessDenied", "Request has expired");
  return payloadOf(payloadHash, one("X-Amz-Signature"), scope);
}

async function compare(signed: Signed, given: { names: string; signature: string; payloadHash: string; scope: Scope; free: Set<string> }): Promise<void> {
  const names = new Set(given.names.split(";"));
  const unsigned = Object.keys(signed.headers).filter((name) => (name === "host" || name.startsWith("x-amz-")) && !names.has(name) && !given.free.has(name));
  if (unsigned.length > 0) throw new S3Fault("AccessDenied", `There were headers present in the request which were not signed: ${unsigned.join(", ")}`);
  const request: HttpRequest = {
    method: signed.method, protocol: "http:", hostname: "", path: canonicalPath(signed.path),
    query: Object.fromEntries(Object.entries(signed.query).filter(([name]) => name !== "X-Amz-Signature")),
    headers: Object.fromEntries([...names].map((name) => [name, signed.headers[name] ?? ""])),
  };
  const recomputation = new Recomputation({ service: "s3", region: "none", credentials: { accessKeyId: "", secretAccessKey: "" }, sha256: Sha256, uriEscapePath: false });
  const computed = await recomputation.signatureOf(request, names, given.payloadHash, given.scope);
  if (!same(given.signature, computed)) throw new S3Fault("SignatureDoesNotMatch", "The signature does not match the one computed here. Check key, secret, address, headers and the way it was signed.");
}

function payloadOf(hash: string, seed: string, scope: Scope): Payload {
  switch (hash) {
    case "UNSIGNED-PAYLOAD":
      return { kind: "unsigned" };
    case "STREAMING-UNSIGNED-PAYLOAD-TRAILER":
      return { kind: "chunked", chain: undefined, trailer: true };
    case "STREAMING-AWS4-HMAC-SHA256-PAYLOAD":
    case "STREAMING-AWS4-HMAC-SHA256-PAYLOAD-TRAILER":
      return { kind: "chunked", chain: chainFrom(seed, scope), trailer: hash.endsWith("TRAILER") };
  }
  if (!/^[0-9a-f]{64}$/.test(hash)) throw new S3Fault("InvalidArgument", "x-amz-content-sha256 must be a SHA-256 in hexadecimal, or UNSIGNED-PAYLOAD, or name a framing.");
  return { kind: "hashed", sha256Hex: hash };
}

/** Every chunk's signature covers the one before it, the first that of the request. */
function chainFrom(seed: string, { longDate, scope, signingKey }: Scope): ChunkChain {
  let previous = seed;
  const check = async (given: string, kind: string, ...hashes: string[]) => {
    const computed = hmacHex(signingKey, [`AWS4-HMAC-SHA256-${kind}`, longDate, scope, previous, ...hashes].join("\n"));
    if (!same(given, computed)) throw new S3Fault("SignatureDoesNotMatch", "The signature of a chunk does not match the one computed here.");
    previous = computed;
  };
  return {
    checkChunk: (signature, hash) => check(signature, "PAYLOAD", EMPTY_SHA256, hash),
    checkTrailer: (signature, hash) => check(signature, "TRAILER", hash),
  };
}
