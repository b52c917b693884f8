import { param, wholeNumber, xmlAnswer, type Answer, type Asked, type House } from "./asked.ts";
import { byUtf8, type Bucket, type StoredObject } from "./catalog.ts";
import { S3Fault } from "./s3-fault.ts";
import { branch, leaf, xmlDocument } from "./xml.ts";

const MOST_AT_ONCE = 1000;

interface Page {
  objects: StoredObject[];
  /** What several keys have in common up to the delimiter, shown once for all of them. */
  prefixes: string[];
  /** The last key or common prefix, to go on after; undefined at the end. */
  next: string | undefined;
}

function firstAfter(keys: readonly string[], text: string, orAt: boolean): number {
  let [low, high] = [0, keys.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    const order = byUtf8(keys[middle]!, text);
    if (order < 0 || (order === 0 && !orAt)) low = middle + 1;
    else high = middle;
  }
  return low;
}

function pageOf({ catalog }: House, bucket: Bucket, asks: { prefix: string; delimiter: string; after: string; most: number }): Page {
  const keys = catalog.keysOf(bucket);
  const { prefix, delimiter, after, most } = asks;
  const page: Page = { objects: [], prefixes: [], next: undefined };
  if (most === 0) return page;
  let last: string | undefined;
  let i = Math.max(firstAfter(keys, prefix, true), firstAfter(keys, after, false));
  // A marker that is a common prefix stands for every key below it.
  if (delimiter && after.endsWith(delimiter) && after.startsWith(prefix)) while (i < keys.length && keys[i]!.startsWith(after)) i++;
  for (; i < keys.length && keys[i]!.startsWith(prefix); i++) {
    const key = keys[i]!;
    const cut = delimiter ? key.indexOf(delimiter, prefix.length) : -1;
    const common = cut < 0 ? undefined : key.slice(0, cut + delimiter.length);
    if (common !== undefined && common === last) continue;
    if (page.objects.length + page.prefixes.length === most) {
      page.next = last;
      return page;
    }
    if (common === undefined) page.objects.push(bucket.objects.get(key)!);
    else page.prefixes.push(common);
    last = common ?? key;
  }
  return page;
}

/** Both forms of the list, and the one of versions, of which there is one each. */
export async function listObjects(asked: Asked, house: House): Promise<Answer> {
  const bucket = house.catalog.bucketNamed(asked.bucket);
  const second = param(asked, "list-type") === "2";
  const versions = asked.query.versions !== undefined;
  const [prefix, delimiter] = [param(asked, "prefix") ?? "", param(asked, "delimiter") ?? ""];
  const most = wholeNumber(param(asked, "max-keys"), MOST_AT_ONCE, "max-keys", 0, 2 ** 31 - 1);
  const token = param(asked, "continuation-token");
  const after = second ? (token === undefined ? (param(asked, "start-after") ?? "") : fromToken(token)) : (param(asked, versions ? "key-marker" : "marker") ?? "");
  const encode = param(asked, "encoding-type") === "url" ? (key: string) => encodeURIComponent(key).replaceAll("%2F", "/") : (key: string) => key;
  const page = pageOf(house, bucket, { prefix, delimiter, after, most: Math.min(most, MOST_AT_ONCE) });

  const head = [
    leaf("Name", bucket.name), leaf("Prefix", encode(prefix)), delimiter ? leaf("Delimiter", encode(delimiter)) : undefined, leaf("MaxKeys", most),
    param(asked, "encoding-type") === "url" ? leaf("EncodingType", "url") : undefined, leaf("IsTruncated", page.next !== undefined),
  ];
  const common = page.prefixes.map((text) => branch("CommonPrefixes", leaf("Prefix", encode(text))));
  const entry = ({ key, bytes, etag, modified }: StoredObject, name: string, ...more: string[]) =>
    branch(name, leaf("Key", encode(key)), ...more, leaf("LastModified", new Date(modified).toISOString()), leaf("ETag", `"${etag}"`), leaf("Size", bytes), leaf("StorageClass", "STANDARD"));

  if (versions) {
    const next = page.next === undefined ? [] : [leaf("NextKeyMarker", encode(page.next)), leaf("NextVersionIdMarker", "null")];
    return xmlAnswer(xmlDocument("ListVersionsResult", ...head, leaf("KeyMarker", encode(after)), ...next, ...page.objects.map((object) => entry(object, "Version", leaf("VersionId", "null"), leaf("IsLatest", true))), ...common));
  }
  const contents = page.objects.map((object) => entry(object, "Contents"));
  if (!second) {
    return xmlAnswer(xmlDocument("ListBucketResult", ...head, leaf("Marker", encode(after)), page.next === undefined ? undefined : leaf("NextMarker", encode(page.next)), ...contents, ...common));
  }
  return xmlAnswer(xmlDocument("ListBucketResult", ...head, leaf("KeyCount", page.objects.length + page.prefixes.length),
    token === undefined ? undefined : leaf("ContinuationToken", token), page.next === undefined ? undefined : leaf("NextContinuationToken", toToken(page.next)), ...contents, ...common));
}

const toToken = (key: string) => Buffer.from(`after:${key}`).toString("base64url");

function fromToken(token: string): string {
  const text = Buffer.from(token, "base64url").toString("utf8");
  if (!text.startsWith("after:")) throw new S3Fault("InvalidArgument", "The continuation token provided is incorrect");
  return text.slice("after:".length);
}
