import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { readAddress } from "#storage/fake/asked.ts";
import { byUtf8 } from "#storage/fake/catalog.ts";
import { startChecksum, type Algorithm } from "#storage/fake/checksums.ts";
import { corsHeaders, parseCors, preflightHeaders, writeCors } from "#storage/fake/cors.ts";
import { readForm } from "#storage/fake/form-data.ts";
import { operationOf } from "#storage/fake/operations.ts";
import { storeErrorOf } from "#storage/store-error.ts";

describe("checksums", () => {
  // Check values over "123456789": CRCs from the Catalogue of parametrised CRC algorithms
  // (CRC-32/ISO-HDLC, CRC-32/ISCSI, CRC-64/NVME), SHA by sha1sum and sha256sum of GNU coreutils.
  test.each<[Algorithm, string]>([
    ["crc32", "cbf43926"], ["crc32c", "e3069283"], ["crc64nvme", "ae8b14860a799888"],
    ["sha1", "f7c3bc1d808e04732adf679965ccc34ca7ae3441"], ["sha256", "15e2b0d3c33891ebb0f1ef609ec419420c20e320ce94c65fbc8c3312448eb225"],
  ])("%s", async (algorithm, value) => {
    const running = await startChecksum(algorithm);
    running.update(Buffer.from("1234"));
    running.update(Buffer.from("56789"));
    expect(running.digest().toString("hex")).toBe(value);
  });

  test("two at a time do not mix", async () => {
    const [a, b] = [await startChecksum("crc32c"), await startChecksum("crc32c")];
    a.update(Buffer.from("1234"));
    b.update(Buffer.from("else"));
    a.update(Buffer.from("56789"));
    expect(a.digest().toString("hex")).toBe("e3069283");
  });
});

test("keys are ordered as their bytes in UTF-8 are", () => {
  fc.assert(fc.property(fc.string({ unit: "binary" }), fc.string({ unit: "binary" }), (a, b) => {
    expect(Math.sign(byUtf8(a, b))).toBe(Buffer.compare(Buffer.from(a), Buffer.from(b)));
  }));
  expect(["\u{10000}", "\uffff", "a"].sort(byUtf8)).toEqual(["a", "\uffff", "\u{10000}"]);
});

test("an address is read into bucket, key and query", () => {
  expect(readAddress("/shop/a%2Fb/c%20d+e?x=1&y=%26&x=2&z")).toEqual({ path: "/shop/a/b/c d+e", bucket: "shop", key: "a/b/c d+e", query: { x: ["1", "2"], y: "&", z: "" } });
  expect(readAddress("/shop")).toMatchObject({ bucket: "shop", key: "" });
  expect(readAddress("/shop//x/")).toMatchObject({ bucket: "shop", key: "/x/" });
  expect(readAddress("/")).toMatchObject({ bucket: "", key: "" });
  expect(() => readAddress("/shop/%ff")).toThrow(/decoded/);
});

test("a word in the query that is not known never turns a request into a plain one", () => {
  const asked = (method: string, key: string, query: Record<string, string>) => ({ method, bucket: "shop", key, query, headers: {} });
  expect(operationOf(asked("PUT", "a", {})).name).toBe("PutObject");
  expect(operationOf(asked("PUT", "a", { "x-id": "PutObject" })).name).toBe("PutObject");
  expect(operationOf(asked("GET", "", { "list-type": "2" })).name).toBe("ListObjectsV2");
  for (const word of ["acl", "tagging", "retention", "legal-hold"]) expect(() => operationOf(asked("PUT", "a", { [word]: "" })), word).toThrow(/has no/);
  for (const word of ["tagging", "versions"]) expect(() => operationOf(asked("DELETE", "a", { [word]: "" })), word).toThrow(/has no/);
  expect(() => operationOf(asked("DELETE", "", { policy: "" }))).toThrow(/has no/);
  expect(() => operationOf(asked("PATCH", "a", {}))).toThrow(/not allowed/);
});

describe("rules for browsers", () => {
  const rules = parseCors(`<CORSConfiguration xmlns="http://s3.amazonaws.com/doc/2006-03-01/"><CORSRule><AllowedOrigin>https://*.shop.example</AllowedOrigin><AllowedOrigin>http://127.0.0.1:4600</AllowedOrigin><AllowedMethod>PUT</AllowedMethod><AllowedMethod>GET</AllowedMethod><AllowedHeader>content-*</AllowedHeader><ExposeHeader>ETag</ExposeHeader><MaxAgeSeconds>600</MaxAgeSeconds></CORSRule></CORSConfiguration>`);

  test("survive being written and read", () => {
    expect(parseCors(writeCors(rules))).toEqual(rules);
  });

  test.each([
    { origin: "https://a.shop.example", method: "PUT", headers: "Content-Type, content-md5", may: true },
    { origin: "http://127.0.0.1:4600", method: "GET", headers: undefined, may: true },
    { origin: "https://shop.example", method: "PUT", headers: undefined, may: false },
    { origin: "https://shop.example.evil.example", method: "PUT", headers: undefined, may: false },
    { origin: "http://127.0.0.1:4601", method: "PUT", headers: undefined, may: false },
    { origin: "https://a.shop.example", method: "DELETE", headers: undefined, may: false },
    { origin: "https://a.shop.example", method: "PUT", headers: "x-amz-acl", may: false },
  ])("$origin $method $headers: $may", ({ origin, method, headers, may }) => {
    if (!may) return expect(() => preflightHeaders(rules, { origin, method, headers })).toThrow(/not allowed/);
    expect(preflightHeaders(rules, { origin, method, headers })).toMatchObject({ "Access-Control-Allow-Origin": origin, "Access-Control-Expose-Headers": "ETag", "Access-Control-Max-Age": "600" });
  });

  test("no rule gives no header, and is not needed without a page", () => {
    expect(corsHeaders(rules, undefined, "GET")).toEqual({});
    expect(corsHeaders(undefined, "https://a.shop.example", "GET")).toEqual({});
    expect(() => preflightHeaders(undefined, { origin: "https://a.shop.example", method: "GET" })).toThrow(/not allowed/);
  });

  test.each(["<CORSConfiguration/>", "<Other/>", "<CORSConfiguration><CORSRule><AllowedOrigin>*</AllowedOrigin></CORSRule></CORSConfiguration>", "<CORSConfiguration><CORSRule><AllowedOrigin>*.*</AllowedOrigin><AllowedMethod>GET</AllowedMethod></CORSRule></CORSConfiguration>", "<CORSConfiguration>"])("refused: %s", (text) => {
    expect(() => parseCors(text)).toThrow();
  });
});

describe("a form with a file", () => {
  const type = "multipart/form-data; boundary=----x";
  const form = (file: string) => `------x\r\nContent-Disposition: form-data; name="Key"\r\n\r\nphotos/\${filename}\r\n------x\r\nContent-Disposition: form-data; name="file"; filename="a.jpg"\r\nContent-Type: image/jpeg\r\n\r\n${file}\r\n------x\r\nContent-Disposition: form-data; name="submit"\r\n\r\nSend\r\n------x--\r\n`;
  async function read(body: string, pieceBytes: number, contentType = type) {
    const bytes = Buffer.from(body, "latin1");
    async function* pieces() {
      for (let at = 0; at < bytes.byteLength; at += pieceBytes) yield bytes.subarray(at, at + pieceBytes);
    }
    const { fields, filename, file } = await readForm(pieces(), contentType);
    const out: Uint8Array[] = [];
    for await (const chunk of file) out.push(chunk);
    return { fields: Object.fromEntries(fields), filename, text: Buffer.concat(out).toString("latin1") };
  }

  test("is read whole, however it is cut up", async () => {
    const almost = "\r\n------y\r\n-----x\r\n------";
    await fc.assert(fc.asyncProperty(fc.integer({ min: 1, max: 500 }), fc.integer({ min: 0, max: 20 }), async (pieceBytes, times) => {
      expect(await read(form(almost.repeat(times)), pieceBytes)).toEqual({ fields: { key: "photos/${filename}" }, filename: "a.jpg", text: almost.repeat(times) });
    }));
  });

  test.each([
    ["no boundary", form("x"), "multipart/form-data"],
    ["another boundary", form("x"), "multipart/form-data; boundary=y"],
    ["cut off in its file", form("x".repeat(500)).slice(0, 400), type],
    ["without a file", '------x\r\nContent-Disposition: form-data; name="key"\r\n\r\na\r\n------x--\r\n', type],
    ["with fields that are too long", form("x").replace("photos/", "p".repeat(30_000)), type],
    ["empty", "", type],
  ])("refused: %s", async (_name, body, contentType) => {
    await expect(read(body, 64, contentType)).rejects.toThrow();
  });
});

test("what the store said becomes one of our reasons, anything else stays what it was", () => {
  const fault = (name: string, httpStatusCode?: number) => Object.assign(new Error("said so"), { name, $metadata: { httpStatusCode } });
  const reason = (error: unknown) => (storeErrorOf(error, "Doing it") as { reason?: string }).reason;
  expect([fault("NoSuchKey", 404), fault("NotFound", 404), fault("PreconditionFailed", 412), fault("BadDigest", 400), fault("AccessDenied", 403), fault("SlowDown", 503), fault("Unheard", 500), fault("InvalidPart", 400)].map(reason))
    .toEqual(["missing", "missing", "exists", "corrupted", "refused", "unreachable", "unreachable", "invalid"]);
  expect(reason(Object.assign(new Error("connect"), { code: "ECONNREFUSED" }))).toBe("unreachable");
  const local = Object.assign(new Error("no such file"), { code: "ENOENT" });
  expect(storeErrorOf(local, "Doing it")).toBe(local);
});
