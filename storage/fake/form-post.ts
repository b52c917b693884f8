import { xmlAnswer, type Answer, type Asked, type House } from "./asked.ts";
import type { StoredObject } from "./catalog.ts";
import { createHash } from "node:crypto";
import { readForm } from "./form-data.ts";
import { refuseKey } from "./objects.ts";
import { S3Fault } from "./s3-fault.ts";
import { checkText, openScope } from "./signature.ts";
import { leaf, xmlDocument } from "./xml.ts";

/** These need no condition in the policy. */
const FREE = new Set(["policy", "x-amz-signature", "file"]);

/**
 * Checks the policy of a form, and that the form keeps to it.
 *
 * @returns how many bytes the file may have
 */
function keepToPolicy(policy: string, fields: ReadonlyMap<string, string>, now: number): { from: number; to: number } {
  let parsed: { expiration?: unknown; conditions?: unknown };
  try {
    parsed = JSON.parse(Buffer.from(policy, "base64").toString("utf8")) as typeof parsed;
  } catch {
    throw new S3Fault("InvalidPolicyDocument", "The policy is no JSON.");
  }
  const until = Date.parse(String(parsed.expiration));
  if (Number.isNaN(until) || !Array.isArray(parsed.conditions)) throw new S3Fault("InvalidPolicyDocument", "A policy needs an expiration and conditions.");
  if (now > until) throw new S3Fault("AccessDenied", "Invalid according to Policy: Policy expired.");
  const range = { from: 0, to: Infinity };
  const covered = new Set<string>();
  const demand = (held: boolean, condition: unknown) => {
    if (!held) throw new S3Fault("AccessDenied", `Invalid according to Policy: Policy Condition failed: ${JSON.stringify(condition)}`);
  };
  for (const condition of parsed.conditions as unknown[]) {
    if (Array.isArray(condition) && condition[0] === "content-length-range") {
      range.from = Math.max(range.from, Number(condition[1]));
      range.to = Math.min(range.to, Number(condition[2]));
      continue;
    }
    const triples = Array.isArray(condition) ? [condition] : Object.entries(condition as object).map(([name, value]) => ["eq", `$${name}`, value]);
    for (const [how, name, value] of triples as Array<[string, string, string]>) {
      const field = String(name).replace(/^\$/, "").toLowerCase();
      covered.add(field);
      const given = fields.get(field) ?? "";
      if (String(how).toLowerCase() === "eq") demand(given === String(value), condition);
      else if (how === "starts-with") demand(given.startsWith(String(value)), condition);
      else throw new S3Fault("InvalidPolicyDocument", `A policy knows no condition ${String(how)}.`);
    }
  }
  for (const name of fields.keys()) {
    if (!FREE.has(name) && name !== "bucket" && !name.startsWith("x-ignore-") && !covered.has(name)) throw new S3Fault("AccessDenied", `Invalid according to Policy: Extra input fields: ${name}`);
  }
  return range;
}

/** Takes a file out of a browser's form, as far as the signed policy in it allows. */
export async function postForm(asked: Asked, { catalog, keys, now }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  const { fields, filename, file } = await readForm(asked.wire, asked.headers["content-type"] ?? "");
  const field = (name: string) => {
    const value = fields.get(name);
    if (value === undefined) throw new S3Fault("InvalidArgument", `Bucket POST must contain a field named '${name}' before the file.`);
    return value;
  };
  if (!fields.has("policy")) throw new S3Fault("AccessDenied", "The form is not signed.");
  if (field("x-amz-algorithm") !== "AWS4-HMAC-SHA256") throw new S3Fault("InvalidArgument", "x-amz-algorithm must be AWS4-HMAC-SHA256.");
  const scope = await openScope(field("x-amz-credential"), field("x-amz-date"), keys);
  checkText(scope, field("policy"), field("x-amz-signature"));
  fields.set("bucket", asked.bucket);
  const range = keepToPolicy(field("policy"), fields, now());
  const key = field("key").replaceAll("${filename}", filename);
  if (key === "") throw new S3Fault("InvalidArgument", "The key is empty.");
  refuseKey(key);

  const md5 = createHash("md5");
  async function* watched(): AsyncGenerator<Uint8Array> {
    let bytes = 0;
    for await (const chunk of file) {
      bytes += chunk.byteLength;
      if (bytes > range.to) throw new S3Fault("EntityTooLarge", "Your proposed upload exceeds the maximum allowed size");
      md5.update(chunk);
      yield chunk;
    }
  }
  const { segment, finished: etag } = await catalog.blobs.write(watched(), (bytes) => {
    if (bytes < range.from) throw new S3Fault("EntityTooSmall", "Your proposed upload is smaller than the minimum allowed size");
    return md5.digest("hex");
  });
  const kept = Object.fromEntries([...fields].filter(([name]) => name === "content-type" || name === "cache-control" || name === "content-disposition" || name.startsWith("x-amz-meta-")));
  const object: StoredObject = { key, bytes: segment.bytes, etag, modified: now(), headers: { "content-type": "application/octet-stream", ...kept }, checksums: {}, checksumType: "FULL_OBJECT", segments: [segment] };
  try {
    await catalog.putObject(asked.bucket, object, () => undefined);
  } catch (error) {
    await catalog.blobs.release([segment]);
    throw error;
  }
  return answerTo(fields, asked.bucket, key, etag);
}

function answerTo(fields: ReadonlyMap<string, string>, bucket: string, key: string, etag: string): Answer {
  const location = `/${bucket}/${encodeURIComponent(key).replaceAll("%2F", "/")}`;
  const headers = { ETag: `"${etag}"`, Location: location };
  const redirect = fields.get("success_action_redirect");
  if (redirect && URL.canParse(redirect)) {
    const target = new URL(redirect);
    for (const [name, value] of Object.entries({ bucket, key, etag: `"${etag}"` })) target.searchParams.set(name, value);
    return { status: 303, headers: { ...headers, Location: target.href } };
  }
  const status = fields.get("success_action_status");
  if (status === "201") return { ...xmlAnswer(xmlDocument("PostResponse", leaf("Location", location), leaf("Bucket", bucket), leaf("Key", key), leaf("ETag", `"${etag}"`)), headers), status: 201 };
  return { status: status === "200" ? 200 : 204, headers };
}
