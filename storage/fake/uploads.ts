import { amz, keptHeaders, param, wholeNumber, xmlAnswer, type Answer, type Asked, type House } from "./asked.ts";
import { byUtf8, type StoredObject, type Upload, type UploadPart } from "./catalog.ts";
import { ALGORITHMS, algorithmNamed, elementOf, startChecksum, type Algorithm } from "./checksums.ts";
import { refuseByState } from "./conditions.ts";
import { receiveBody, receiveText } from "./incoming.ts";
import { checksumHeaders, copySource, etagOfParts, refuseKey } from "./objects.ts";
import { S3Fault } from "./s3-fault.ts";
import { branch, elements, leaf, parseRoot, textOf, xmlDocument } from "./xml.ts";

const SMALLEST_PART = 5 * 1024 * 1024;
const MOST_PARTS = 10_000;

export async function beginUpload(asked: Asked, { catalog, now }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  refuseKey(asked.key);
  const named = amz(asked, "x-amz-checksum-algorithm");
  const checksum = named === undefined ? undefined : algorithmNamed(named);
  const type = amz(asked, "x-amz-checksum-type")?.toUpperCase() ?? (checksum === "crc64nvme" ? "FULL_OBJECT" : "COMPOSITE");
  if (type !== "COMPOSITE" && type !== "FULL_OBJECT") throw new S3Fault("InvalidRequest", "x-amz-checksum-type must be COMPOSITE or FULL_OBJECT.");
  const id = await catalog.addUpload({ bucket: asked.bucket, key: asked.key, begun: now(), headers: keptHeaders(asked), checksum, checksumType: type });
  const headers: Record<string, string> = checksum ? { "x-amz-checksum-algorithm": checksum.toUpperCase(), "x-amz-checksum-type": type } : {};
  return xmlAnswer(xmlDocument("InitiateMultipartUploadResult", leaf("Bucket", asked.bucket), leaf("Key", asked.key), leaf("UploadId", id)), headers);
}

function partNumberOf(asked: Asked): number {
  return wholeNumber(param(asked, "partNumber"), NaN, "partNumber", 1, MOST_PARTS);
}

export async function uploadPart(asked: Asked, house: House): Promise<Answer> {
  const id = param(asked, "uploadId") ?? "";
  const number = partNumberOf(asked);
  const { upload } = house.catalog.uploadOf(asked.bucket, asked.key, id);
  const other = ALGORITHMS.find((algorithm) => amz(asked, `x-amz-checksum-${algorithm}`) !== undefined && algorithm !== upload.checksum);
  if (other && (upload.checksum || other.startsWith("sha"))) {
    throw new S3Fault("InvalidRequest", `Checksum Type mismatch occurred, expected checksum Type: ${upload.checksum ?? "null"}, actual checksum Type: ${other}`);
  }
  const received = await receiveBody(asked, house, upload.checksum);
  const part: UploadPart = { number, etag: received.md5Hex, modified: house.now(), segment: received.segment, checksums: received.checksums };
  await keepPart(asked, house, id, part);
  return { status: 200, headers: { ETag: `"${part.etag}"`, ...checksumHeaders({ checksums: part.checksums, checksumType: "FULL_OBJECT" }) } };
}

async function keepPart(asked: Asked, { catalog }: House, id: string, part: UploadPart): Promise<void> {
  try {
    await catalog.putPart(asked.bucket, asked.key, id, part);
  } catch (error) {
    await catalog.blobs.release([part.segment]);
    throw error;
  }
}

/** Makes a part out of bytes that are stored already. */
export async function copyPart(asked: Asked, house: House): Promise<Answer> {
  const id = param(asked, "uploadId") ?? "";
  const number = partNumberOf(asked);
  const { upload } = house.catalog.uploadOf(asked.bucket, asked.key, id);
  const source = copySource(asked, house);
  const asks = amz(asked, "x-amz-copy-source-range");
  const [, first, last] = /^bytes=(\d+)-(\d+)$/.exec(asks ?? `bytes=0-${source.bytes - 1}`) ?? [];
  const [from, end] = [Number(first), Number(last) + 1];
  if (!(from < end && end <= source.bytes)) throw new S3Fault("InvalidArgument", "x-amz-copy-source-range must lie inside the source.");
  const reader = house.catalog.blobs.open(source.segments);
  try {
    const body: Asked = { ...asked, payload: { kind: "unsigned" }, headers: { "content-length": String(end - from) }, wire: reader.read(from, end) };
    const received = await receiveBody(body, house, upload.checksum);
    await keepPart(asked, house, id, { number, etag: received.md5Hex, modified: house.now(), segment: received.segment, checksums: received.checksums });
    return xmlAnswer(xmlDocument("CopyPartResult", leaf("LastModified", new Date(house.now()).toISOString()), leaf("ETag", `"${received.md5Hex}"`)));
  } finally {
    await reader.close();
  }
}

export async function listParts(asked: Asked, { catalog }: House): Promise<Answer> {
  const id = param(asked, "uploadId") ?? "";
  const { parts } = catalog.uploadOf(asked.bucket, asked.key, id);
  const after = wholeNumber(param(asked, "part-number-marker"), 0, "part-number-marker", 0, MOST_PARTS);
  const most = wholeNumber(param(asked, "max-parts"), 1000, "max-parts", 0, 2 ** 31 - 1);
  const rest = [...parts.values()].filter(({ number }) => number > after).sort((a, b) => a.number - b.number);
  const page = rest.slice(0, Math.min(most, 1000));
  return xmlAnswer(xmlDocument("ListPartsResult",
    leaf("Bucket", asked.bucket), leaf("Key", asked.key), leaf("UploadId", id), leaf("PartNumberMarker", after),
    leaf("NextPartNumberMarker", page.at(-1)?.number ?? after), leaf("MaxParts", most), leaf("IsTruncated", page.length < rest.length),
    ...page.map((part) => branch("Part",
      leaf("PartNumber", part.number), leaf("LastModified", new Date(part.modified).toISOString()), leaf("ETag", `"${part.etag}"`), leaf("Size", part.segment.bytes), ...checksumLeaves(part.checksums)))));
}

export function checksumLeaves(checksums: Partial<Record<Algorithm, string>>): string[] {
  return Object.entries(checksums).map(([algorithm, value]) => leaf(elementOf(algorithm as Algorithm), value));
}

/** Joins the parts that the client lists; what else was sent is thrown away. */
export async function completeUpload(asked: Asked, house: House): Promise<Answer> {
  const { catalog } = house;
  const id = param(asked, "uploadId") ?? "";
  const root = parseRoot(await receiveText(asked), "CompleteMultipartUpload");
  const object = await catalog.exclusively(`upload ${id}`, async () => {
    const { upload, parts } = catalog.uploadOf(asked.bucket, asked.key, id);
    const chosen = elements(root, "Part").map((said) => {
      const part = parts.get(Number(textOf(said, "PartNumber")));
      const sums = ALGORITHMS.every((algorithm) => (textOf(said, elementOf(algorithm)) ?? part?.checksums[algorithm]) === part?.checksums[algorithm]);
      if (!part || textOf(said, "ETag")?.replaceAll('"', "") !== part.etag || !sums) throw new S3Fault("InvalidPart", "One or more of the specified parts could not be found, or is another one.");
      return part;
    });
    if (chosen.length === 0) throw new S3Fault("MalformedXML", "You must specify at least one part");
    if (chosen.some((part, i) => i > 0 && part.number <= chosen[i - 1]!.number)) throw new S3Fault("InvalidPartOrder", "The list of parts was not in ascending order.");
    if (chosen.slice(0, -1).some(({ segment }) => segment.bytes < SMALLEST_PART)) throw new S3Fault("EntityTooSmall", "Every part but the last must hold 5 MiB at least.");
    const segments = chosen.map(({ segment }) => segment);
    const joined: StoredObject = {
      key: upload.key, bytes: segments.reduce((sum, { bytes }) => sum + bytes, 0), etag: etagOfParts(chosen.map(({ etag }) => etag)), modified: house.now(),
      headers: upload.headers, checksums: {}, checksumType: upload.checksumType, segments,
    };
    if (upload.checksum) joined.checksums = { [upload.checksum]: await joinedChecksum(asked, house, upload, upload.checksum, chosen) };
    catalog.blobs.hold(segments);
    try {
      await catalog.putObject(asked.bucket, joined, (present) => refuseByState(asked, present));
    } catch (error) {
      await catalog.blobs.release(segments);
      throw error;
    }
    await catalog.dropUpload(id);
    return joined;
  });
  return xmlAnswer(xmlDocument("CompleteMultipartUploadResult",
    leaf("Location", `/${asked.bucket}/${asked.key}`), leaf("Bucket", asked.bucket), leaf("Key", asked.key), leaf("ETag", `"${object.etag}"`), ...checksumLeaves(object.checksums)));
}

/** Of all bytes, or of the parts' checksums as the ETag is; compared with what the client expects. */
async function joinedChecksum(asked: Asked, { catalog }: House, upload: Upload, algorithm: Algorithm, parts: readonly UploadPart[]): Promise<string> {
  const running = await startChecksum(algorithm);
  if (upload.checksumType === "COMPOSITE") for (const part of parts) running.update(Buffer.from(part.checksums[algorithm]!, "base64"));
  else {
    const reader = catalog.blobs.open(parts.map(({ segment }) => segment));
    try {
      for await (const chunk of reader.read(0, Infinity)) running.update(chunk);
    } finally {
      await reader.close();
    }
  }
  const computed = running.digest().toString("base64") + (upload.checksumType === "COMPOSITE" ? `-${parts.length}` : "");
  const expected = amz(asked, `x-amz-checksum-${algorithm}`);
  // The SDK gives the composite value with or without the number of parts.
  if (expected !== undefined && expected !== computed && `${expected}-${parts.length}` !== computed) throw new S3Fault("BadDigest", "The checksum of the whole object did not match.");
  return computed;
}

export async function abortUpload(asked: Asked, { catalog }: House): Promise<Answer> {
  const id = param(asked, "uploadId") ?? "";
  await catalog.exclusively(`upload ${id}`, async () => {
    catalog.uploadOf(asked.bucket, asked.key, id);
    await catalog.dropUpload(id);
  });
  return { status: 204 };
}

export async function listUploads(asked: Asked, { catalog }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  const prefix = param(asked, "prefix") ?? "";
  const [afterKey, afterId] = [param(asked, "key-marker") ?? "", param(asked, "upload-id-marker") ?? ""];
  const most = wholeNumber(param(asked, "max-uploads"), 1000, "max-uploads", 1, 1000);
  const encode = param(asked, "encoding-type") === "url" ? (key: string) => encodeURIComponent(key).replaceAll("%2F", "/") : (key: string) => key;
  const order = (a: Upload, b: Upload) => byUtf8(a.key, b.key) || byUtf8(a.id, b.id);
  const rest = catalog.listUploads(asked.bucket).filter(({ key, id }) => {
    const past = byUtf8(key, afterKey);
    return key.startsWith(prefix) && (past > 0 || (past === 0 && afterId !== "" && id > afterId));
  }).sort(order);
  const page = rest.slice(0, most);
  const more = page.length < rest.length;
  return xmlAnswer(xmlDocument("ListMultipartUploadsResult",
    leaf("Bucket", asked.bucket), leaf("KeyMarker", encode(afterKey)), leaf("UploadIdMarker", afterId), leaf("Prefix", encode(prefix)), leaf("MaxUploads", most), leaf("IsTruncated", more),
    more ? leaf("NextKeyMarker", encode(page.at(-1)!.key)) : undefined, more ? leaf("NextUploadIdMarker", page.at(-1)!.id) : undefined,
    ...page.map(({ key, id, begun }) => branch("Upload", leaf("Key", encode(key)), leaf("UploadId", id), leaf("StorageClass", "STANDARD"), leaf("Initiated", new Date(begun).toISOString())))));
}
