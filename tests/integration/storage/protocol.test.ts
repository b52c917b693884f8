import { createHash, createHmac, randomBytes } from "node:crypto";
import { Readable } from "node:stream";
import {
  type ChecksumAlgorithm, CompleteMultipartUploadCommand, CopyObjectCommand, CreateMultipartUploadCommand, DeleteObjectsCommand, GetBucketLocationCommand, GetObjectCommand, HeadObjectCommand,
  ListObjectsCommand, ListObjectsV2Command, ListObjectVersionsCommand, ListPartsCommand, PutObjectCommand, UploadPartCommand, UploadPartCopyCommand, S3Client, type PutObjectCommandInput, type S3ClientConfig,
} from "@aws-sdk/client-s3";
import { getSignedUrl } from "@aws-sdk/s3-request-presigner";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { openEndpoint, type Endpoint } from "./endpoint.ts";

// S3 as other programs speak it: the SDK with its defaults (checksums in trailers, streams in
// chunks), forms of browsers, headers by hand. Holds for every S3-compatible store.
let at: Endpoint;
let Bucket: string;
beforeAll(async () => {
  at = await openEndpoint();
  Bucket = at.settings.bucket;
});
afterAll(() => at.close());

const MIB = 1024 * 1024;
const key = (name: string) => at.prefix + name;
const put = (name: string, more: Partial<PutObjectCommandInput> = {}) => at.plain.send(new PutObjectCommand({ Bucket, Key: key(name), Body: name, ...more }));
const text = async (name: string) => (await at.plain.send(new GetObjectCommand({ Bucket, Key: key(name) }))).Body!.transformToString();
const code = (work: Promise<unknown>) => work.then(() => "none", (error: Error) => error.name);
/** A client to tamper with, which asks once. */
const another = (more: S3ClientConfig = {}) => {
  const { endpoint, region, accessKeyId, secretAccessKey } = at.settings;
  return new S3Client({ endpoint, region, forcePathStyle: true, maxAttempts: 1, credentials: { accessKeyId, secretAccessKey }, ...more });
};
const sha256 = (bytes: string | Buffer) => createHash("sha256").update(bytes).digest("base64");

describe("the SDK with its defaults", () => {
  test("a stream is stored without the framing it came in", async () => {
    const bytes = randomBytes(200_000);
    await put("framed", { Body: Readable.from([bytes.subarray(0, 70_000), bytes.subarray(70_000)]), ContentLength: 200_000, ContentEncoding: "gzip" });
    const got = await at.plain.send(new GetObjectCommand({ Bucket, Key: key("framed") }));
    expect(got.ContentLength).toBe(200_000);
    expect(got.ContentEncoding).toBe("gzip");
    expect(Buffer.from(await got.Body!.transformToByteArray()).equals(bytes)).toBe(true);
  });

  test.each(["CRC32", "CRC32C", "CRC64NVME", "SHA1", "SHA256"] as const)("%s of a text and of a stream is kept and given back", async (name) => {
    const ChecksumAlgorithm = name as ChecksumAlgorithm;
    for (const [i, Body] of ["123456789", Readable.from([Buffer.from("12345"), Buffer.from("6789")])].entries()) {
      await put(`sum-${name}-${i}`, { Body, ContentLength: 9, ChecksumAlgorithm });
      const head = await at.plain.send(new HeadObjectCommand({ Bucket, Key: key(`sum-${name}-${i}`), ChecksumMode: "ENABLED" }));
      // Check values as in tests/unit/storage/fake-parts.test.ts.
      const expected = { CRC32: "cbf43926", CRC32C: "e3069283", CRC64NVME: "ae8b14860a799888", SHA1: "f7c3bc1d808e04732adf679965ccc34ca7ae3441", SHA256: "15e2b0d3c33891ebb0f1ef609ec419420c20e320ce94c65fbc8c3312448eb225" }[name];
      expect(Buffer.from(head[`Checksum${name}`]!, "base64").toString("hex")).toBe(expected);
    }
  });

  test("what was sent with a wrong checksum is refused and not kept", async () => {
    expect(await code(put("wrong", { ChecksumSHA256: sha256("else") }))).toBe("BadDigest");
    expect(await code(put("wrong", { ChecksumCRC32: "AAAAAA==" }))).toBe("BadDigest");
    expect(await code(put("wrong", { ContentMD5: createHash("md5").update("else").digest("base64") }))).toBe("BadDigest");
    expect(await code(put("wrong", { ContentMD5: "short" }))).toBe("InvalidDigest");
    expect(await code(at.plain.send(new HeadObjectCommand({ Bucket, Key: key("wrong") })))).toBe("NotFound");
  });

  test("bytes changed after they were signed are refused and not kept", async () => {
    const bare = another({ requestChecksumCalculation: "WHEN_REQUIRED" });
    bare.middlewareStack.add((next) => (args) => {
      (args.request as { body: unknown }).body = "changed!";
      return next(args);
    }, { step: "deserialize" });
    // Only the signed hash of the body speaks against it: no checksum was sent.
    expect(await code(bare.send(new PutObjectCommand({ Bucket, Key: key("changed"), Body: "as sent." })))).toBe("XAmzContentSHA256Mismatch");
    expect(await code(at.plain.send(new HeadObjectCommand({ Bucket, Key: key("changed") })))).toBe("NotFound");
    bare.destroy();
  });

  test("a framed stream that holds less or more than it announced is refused and not kept", async () => {
    for (const [announced, name] of [[10, "IncompleteBody"], [8, "InvalidRequest"]] as const) {
      const framing = another();
      framing.middlewareStack.add((next) => (args) => {
        const { headers } = args.request as { headers: Record<string, string> };
        headers["x-amz-decoded-content-length"] = String(announced);
        return next(args);
      }, { step: "build", priority: "low" });
      const work = framing.send(new PutObjectCommand({ Bucket, Key: key("misframed"), Body: Readable.from([Buffer.from("123456789")]), ContentLength: 9 }));
      expect(await code(work)).toBe(name);
      expect(await code(at.plain.send(new HeadObjectCommand({ Bucket, Key: key("misframed") })))).toBe("NotFound");
      framing.destroy();
    }
  });

  test("parts carry checksums, and the whole has one", async () => {
    const parts = [randomBytes(5 * MIB), randomBytes(1_000)];
    const where = { Bucket, Key: key("summed-parts") };
    const { UploadId } = await at.plain.send(new CreateMultipartUploadCommand({ ...where, ChecksumAlgorithm: "SHA256" }));
    expect(await code(at.plain.send(new UploadPartCommand({ ...where, UploadId, PartNumber: 1, Body: parts[0], ChecksumSHA256: sha256(parts[1]!) })))).toBe("BadDigest");
    const Parts = [];
    for (const [i, Body] of parts.entries()) {
      const { ETag, ChecksumSHA256 } = await at.plain.send(new UploadPartCommand({ ...where, UploadId, PartNumber: i + 1, Body, ChecksumAlgorithm: "SHA256" }));
      expect(ChecksumSHA256).toBe(sha256(Body));
      Parts.push({ PartNumber: i + 1, ETag, ChecksumSHA256 });
    }
    const wrong = [{ ...Parts[0], ChecksumSHA256: Parts[1]!.ChecksumSHA256 }, Parts[1]!];
    expect(await code(at.plain.send(new CompleteMultipartUploadCommand({ ...where, UploadId, MultipartUpload: { Parts: wrong } })))).toBe("InvalidPart");
    expect(await code(at.plain.send(new CompleteMultipartUploadCommand({ ...where, UploadId, MultipartUpload: { Parts: Parts.toReversed() } })))).toBe("InvalidPartOrder");
    const joined = await at.plain.send(new CompleteMultipartUploadCommand({ ...where, UploadId, MultipartUpload: { Parts } }));
    // "Checking object integrity" in the S3 user guide: the checksum of the parts' checksums.
    expect(joined.ChecksumSHA256).toBe(`${sha256(Buffer.concat(parts.map((part) => createHash("sha256").update(part).digest())))}-2`);
    // The same of MD5, as the API reference says of an ETag of parts.
    expect(joined.ETag).toBe(`"${createHash("md5").update(Buffer.concat(parts.map((part) => createHash("md5").update(part).digest()))).digest("hex")}-2"`);
  });

  test("parts are listed over pages, and one can be copied from what is stored", async () => {
    const where = { Bucket, Key: key("copied-parts") };
    await put("part-source", { Body: "0123456789" });
    const { UploadId } = await at.plain.send(new CreateMultipartUploadCommand(where));
    for (const PartNumber of [1, 2, 3]) await at.plain.send(new UploadPartCommand({ ...where, UploadId, PartNumber, Body: `part ${PartNumber}` }));
    const first = await at.plain.send(new ListPartsCommand({ ...where, UploadId, MaxParts: 2 }));
    expect([first.IsTruncated, first.Parts!.map(({ PartNumber }) => PartNumber)]).toEqual([true, [1, 2]]);
    const rest = await at.plain.send(new ListPartsCommand({ ...where, UploadId, PartNumberMarker: first.NextPartNumberMarker }));
    expect([rest.IsTruncated, rest.Parts!.map(({ PartNumber }) => PartNumber)]).toEqual([false, [3]]);
    const { CopyPartResult } = await at.plain.send(new UploadPartCopyCommand({ ...where, UploadId, PartNumber: 4, CopySource: `${Bucket}/${key("part-source")}`, CopySourceRange: "bytes=2-5" }));
    await at.plain.send(new CompleteMultipartUploadCommand({ ...where, UploadId, MultipartUpload: { Parts: [{ PartNumber: 4, ETag: CopyPartResult!.ETag }] } }));
    expect(await text("copied-parts")).toBe("2345");
  });

  test("an address signed by defaults carries the checksum of an empty body, and is refused for any other", async () => {
    const url = await getSignedUrl(at.plain, new PutObjectCommand({ Bucket, Key: key("presigned-put"), Body: "" }), { expiresIn: 60 });
    expect(url).toContain("x-amz-checksum-crc32=AAAAAA%3D%3D");
    expect((await fetch(url, { method: "PUT", body: "not empty" })).status).toBe(400);
    expect((await fetch(url, { method: "PUT", body: "" })).status).toBe(200);
  });
});

describe("conditions", () => {
  test("of a write", async () => {
    const { ETag } = await put("cond", { IfNoneMatch: "*" });
    expect(await code(put("cond", { IfNoneMatch: "*" }))).toBe("PreconditionFailed");
    expect(await code(put("cond", { IfMatch: '"0123456789abcdef0123456789abcdef"' }))).toBe("PreconditionFailed");
    expect(await code(put("cond", { IfMatch: ETag, Body: "second" }))).toBe("none");
    expect(await code(put("cond", { IfMatch: ETag }))).toBe("PreconditionFailed");
    expect(await code(put("cond-none", { IfMatch: ETag }))).toBe("NoSuchKey");
    expect(await text("cond")).toBe("second");
  });

  test("of a read", async () => {
    const { ETag } = await put("cond-read");
    const get = (more: object) => code(at.plain.send(new GetObjectCommand({ Bucket, Key: key("cond-read"), ...more })));
    const status = (more: object) => at.plain.send(new HeadObjectCommand({ Bucket, Key: key("cond-read"), ...more })).then(() => 200, (error: { $metadata: { httpStatusCode: number } }) => error.$metadata.httpStatusCode);
    expect(await get({ IfMatch: ETag })).toBe("none");
    expect(await get({ IfMatch: '"else"' })).toBe("PreconditionFailed");
    expect(await status({ IfNoneMatch: ETag })).toBe(304);
    expect(await status({ IfModifiedSince: new Date(Date.now() + 1000) })).toBe(304);
    expect(await status({ IfUnmodifiedSince: new Date(0) })).toBe(412);
    expect(await status({ IfModifiedSince: new Date(0) })).toBe(200);
  });

  test.each([
    { range: "bytes=2-4", status: 206, body: "234" },
    { range: "bytes=7-", status: 206, body: "789" },
    { range: "bytes=-3", status: 206, body: "789" },
    { range: "bytes=-30", status: 206, body: "0123456789" },
    { range: "bytes=5-2", status: 200, body: "0123456789" },
    { range: "lines=1-2", status: 200, body: "0123456789" },
    { range: "bytes=10-", status: 416, body: undefined },
  ])("of a range: $range", async ({ range, status, body }) => {
    await put("range", { Body: "0123456789" });
    const url = await getSignedUrl(at.plain, new GetObjectCommand({ Bucket, Key: key("range") }), { expiresIn: 60 });
    const answer = await fetch(url, { headers: { range } });
    expect(answer.status).toBe(status);
    if (body !== undefined) expect(await answer.text()).toBe(body);
    if (status === 206) expect(answer.headers.get("content-range")).toMatch(/^bytes \d+-\d+\/10$/);
  });
});

describe("copies, lists and removals", () => {
  test("a copy has the bytes and what was said about them, or what is said now", async () => {
    await put("source", { ContentType: "model/stl", Metadata: { unit: "mm" } });
    const copy = (more: object) => at.plain.send(new CopyObjectCommand({ Bucket, Key: key("copy"), CopySource: encodeURIComponent(`${Bucket}/${key("source")}`), ...more }));
    const head = async () => { const { ContentType, Metadata } = await at.plain.send(new HeadObjectCommand({ Bucket, Key: key("copy") })); return { ContentType, Metadata }; };
    await copy({});
    expect(await text("copy")).toBe("source");
    expect(await head()).toEqual({ ContentType: "model/stl", Metadata: { unit: "mm" } });
    await copy({ MetadataDirective: "REPLACE", ContentType: "model/step", Metadata: { unit: "in" } });
    expect(await head()).toEqual({ ContentType: "model/step", Metadata: { unit: "in" } });
    await put("source", { Body: "changed since" });
    expect(await text("copy")).toBe("source");
    expect(await code(copy({ CopySourceIfMatch: '"else"' }))).toBe("PreconditionFailed");
    expect(await code(copy({ CopySource: `${Bucket}/${key("not-there")}` }))).toBe("NoSuchKey");
  });

  test("both lists fold what follows a delimiter, and go on where they stopped", async () => {
    for (const name of ["l/a", "l/b/1", "l/b/2", "l/c", "l/d/1", "l/e"]) await put(name);
    const names: string[] = [];
    let ContinuationToken: string | undefined;
    do {
      const page = await at.plain.send(new ListObjectsV2Command({ Bucket, Prefix: key("l/"), Delimiter: "/", MaxKeys: 2, ContinuationToken }));
      names.push(...(page.Contents ?? []).map(({ Key }) => Key!), ...(page.CommonPrefixes ?? []).map(({ Prefix }) => Prefix!));
      expect(page.KeyCount).toBeLessThanOrEqual(2);
      ContinuationToken = page.NextContinuationToken;
    } while (ContinuationToken);
    const expected = ["l/a", "l/b/", "l/c", "l/d/", "l/e"].map(key);
    expect(names.sort()).toEqual(expected);
    const older: string[] = [];
    let Marker: string | undefined;
    do {
      const page = await at.plain.send(new ListObjectsCommand({ Bucket, Prefix: key("l/"), Delimiter: "/", MaxKeys: 2, Marker }));
      older.push(...(page.Contents ?? []).map(({ Key }) => Key!), ...(page.CommonPrefixes ?? []).map(({ Prefix }) => Prefix!));
      Marker = page.IsTruncated ? page.NextMarker : undefined;
    } while (Marker);
    expect(older.sort()).toEqual(expected);
    const after = await at.plain.send(new ListObjectsV2Command({ Bucket, Prefix: key("l/"), StartAfter: key("l/c") }));
    expect(after.Contents!.map(({ Key }) => Key)).toEqual(["l/d/1", "l/e"].map(key));
    const versions = await at.plain.send(new ListObjectVersionsCommand({ Bucket, Prefix: key("l/b/") }));
    expect(versions.Versions!.map(({ Key }) => Key)).toEqual(["l/b/1", "l/b/2"].map(key));
    expect(await code(at.plain.send(new ListObjectsV2Command({ Bucket, ContinuationToken: "invented" })))).toBe("InvalidArgument");
  });

  test("names with signs of XML survive a list and a removal of several", async () => {
    const odd = ['odd/<a>&"b".stl', "odd/c d+e", "odd/ü"];
    for (const name of odd) await put(name);
    const list = async () => ((await at.plain.send(new ListObjectsV2Command({ Bucket, Prefix: key("odd/") }))).Contents ?? []).map(({ Key }) => Key);
    expect(await list()).toEqual(odd.map(key));
    const { Deleted } = await at.plain.send(new DeleteObjectsCommand({ Bucket, Delete: { Objects: [...odd, "odd/never"].map((name) => ({ Key: key(name) })) } }));
    expect(Deleted!.map(({ Key }) => Key).sort()).toEqual([...odd, "odd/never"].map(key).sort());
    expect(await list()).toEqual([]);
  });

  test("the bucket says where it is", async () => {
    expect((await at.plain.send(new GetBucketLocationCommand({ Bucket }))).LocationConstraint ?? "us-east-1").toBe(at.settings.region);
  });

  test("a key over 1024 bytes is refused", async () => {
    expect(await code(put("k".repeat(1025)))).toBe("KeyTooLongError");
  });
});

describe("a form of a browser", () => {
  /** A signed policy, made as the API reference describes "POST policy" and nothing of ours. */
  function formFor(conditions: unknown[], { expires = 60, fields = {} as Record<string, string> } = {}) {
    const { accessKeyId, secretAccessKey, region } = at.settings;
    const longDate = new Date().toISOString().replace(/[-:]|\.\d+/g, "");
    const date = longDate.slice(0, 8);
    const credential = `${accessKeyId}/${date}/${region}/s3/aws4_request`;
    const signedFields = { "x-amz-algorithm": "AWS4-HMAC-SHA256", "x-amz-credential": credential, "x-amz-date": longDate };
    const policy = Buffer.from(JSON.stringify({ expiration: new Date(Date.now() + expires * 1000).toISOString(), conditions: [...conditions, { bucket: Bucket }, ...Object.entries(signedFields).map(([name, value]) => ({ [name]: value }))] })).toString("base64");
    const signingKey = [date, region, "s3", "aws4_request"].reduce<string | Buffer>((k, part) => createHmac("sha256", k).update(part).digest(), `AWS4${secretAccessKey}`);
    const form = new FormData();
    for (const [name, value] of Object.entries({ ...fields, ...signedFields, policy, "x-amz-signature": createHmac("sha256", signingKey).update(policy).digest("hex") })) form.append(name, value);
    return form;
  }
  async function post(form: FormData, body: string) {
    form.append("file", new Blob([body]), "photo.jpg");
    return fetch(`${at.settings.endpoint}/${Bucket}`, { method: "POST", body: form, redirect: "manual" });
  }
  const conditions = () => [["starts-with", "$key", at.prefix], ["content-length-range", 3, 10], ["starts-with", "$Content-Type", "image/"]];
  const fields = () => ({ key: key("form/${filename}"), "Content-Type": "image/jpeg" });

  test("stores what the policy allows", async () => {
    expect((await post(formFor(conditions(), { fields: fields() }), "12345")).status).toBe(204);
    const got = await at.plain.send(new GetObjectCommand({ Bucket, Key: key("form/photo.jpg") }));
    expect([await got.Body!.transformToString(), got.ContentType]).toEqual(["12345", "image/jpeg"]);
    const created = await post(formFor([...conditions(), { success_action_status: "201" }], { fields: { ...fields(), success_action_status: "201" } }), "12345");
    expect(created.status).toBe(201);
    expect(await created.text()).toContain(`<Key>${key("form/photo.jpg")}</Key>`);
  });

  test.each([
    ["more bytes than it allows", "12345678901", {}, 400, "EntityTooLarge"],
    ["fewer bytes than it allows", "12", {}, 400, "EntityTooSmall"],
    ["another place", "12345", { key: "elsewhere" }, 403, "AccessDenied"],
    ["another kind", "12345", { "Content-Type": "text/html" }, 403, "AccessDenied"],
    ["a field that it does not name", "12345", { "x-amz-meta-owner": "me" }, 403, "AccessDenied"],
  ])("refuses %s", async (_name, body, more, status, said) => {
    const answer = await post(formFor(conditions(), { fields: { ...fields(), ...more } }), body);
    expect(answer.status).toBe(status);
    expect(await answer.text()).toContain(`<Code>${said}</Code>`);
  });

  test("refuses a policy that is changed or over", async () => {
    expect((await post(formFor(conditions(), { fields: fields(), expires: -1 }), "12345")).status).toBe(403);
    const changed = formFor(conditions(), { fields: fields() });
    changed.set("policy", Buffer.from(Buffer.from(changed.get("policy") as string, "base64").toString().replace(",10]", ",1000]")).toString("base64"));
    expect((await post(changed, "12345678901")).status).toBe(403);
  });
});

test("a refusal is XML that names its code, the resource and the request", async () => {
  const answer = await fetch(`${at.settings.endpoint}/${Bucket}/unsigned`);
  expect(answer.status).toBe(403);
  expect(await answer.text()).toMatch(/^<\?xml .*<Error><Code>AccessDenied<\/Code><Message>[^<]+<\/Message>(<Resource>[^<]+<\/Resource>)?<RequestId>\w+<\/RequestId>/s);
});
