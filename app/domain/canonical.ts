import { sha256 } from "@noble/hashes/sha2";
import { bytesToHex, utf8ToBytes } from "@noble/hashes/utils";

/** A plain JSON value: what survives a round trip through JSON text unchanged. */
export type Json = null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json };

/**
 * Which one text stands for this value, whoever writes it? Keys in the order of their UTF-16 code
 * units, no white space, numbers and strings as ECMAScript writes them (RFC 8785, sections 3.2.2
 * and 3.2.3), so that equal values have equal bytes and equal hashes.
 *
 * @param value plain data: null, booleans, finite numbers, strings, arrays, objects; object keys
 *   whose value is undefined are left out, as JSON does
 * @throws TypeError for anything JSON can't say exactly (NaN, dates, functions, undefined in an
 *   array, a lone surrogate), with the place where it stands
 */
export function canonicalJson(value: unknown): string {
  return write(value, "$");
}

function write(value: unknown, place: string): string {
  if (value === null || typeof value === "boolean") return String(value);
  if (typeof value === "number") {
    if (!Number.isFinite(value)) throw new TypeError(`${place} is not a finite number`);
    return JSON.stringify(value); // -0 becomes "0", as RFC 8785 asks
  }
  if (typeof value === "string") {
    if (!isWellFormed(value)) throw new TypeError(`${place} holds half a character (a lone surrogate)`);
    return JSON.stringify(value);
  }
  if (Array.isArray(value)) return `[${value.map((item, index) => write(item, `${place}[${index}]`)).join(",")}]`;
  if (typeof value === "object" && isPlain(value)) {
    const entries = Object.entries(value).filter(([, item]) => item !== undefined);
    entries.sort(([a], [b]) => (a < b ? -1 : 1)); // "<" on strings compares UTF-16 code units
    return `{${entries.map(([key, item]) => `${write(key, place)}:${write(item, `${place}.${key}`)}`).join(",")}}`;
  }
  throw new TypeError(`${place} is not plain data`);
}

function isPlain(value: object): boolean {
  const prototype: unknown = Object.getPrototypeOf(value);
  return prototype === Object.prototype || prototype === null;
}

// String.prototype.isWellFormed is younger than the library level this project compiles to.
function isWellFormed(text: string): boolean {
  return !/[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/.test(text);
}

/** SHA-256 (FIPS 180-4) of bytes, or of a text's UTF-8 bytes, as 64 lower-case hex digits. */
export function sha256Hex(data: string | Uint8Array): string {
  return bytesToHex(sha256(typeof data === "string" ? utf8ToBytes(data) : data));
}
