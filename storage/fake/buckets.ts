import { xmlAnswer, type Answer, type Asked, type House } from "./asked.ts";
import { parseCors, writeCors } from "./cors.ts";
import { receiveText } from "./incoming.ts";
import { S3Fault } from "./s3-fault.ts";
import { branch, leaf, xmlDocument } from "./xml.ts";

const OWNER = branch("Owner", leaf("ID", "spotblue"), leaf("DisplayName", "spotblue"));

/** Names by the rules of S3; a name that holds is also the name of a folder. */
function refuseName(name: string): void {
  if (!/^[a-z0-9][a-z0-9.-]{1,61}[a-z0-9]$/.test(name) || name.includes("..") || /^\d+\.\d+\.\d+\.\d+$/.test(name)) throw new S3Fault("InvalidBucketName", "A bucket's name has 3 to 63 small letters, digits, dots and hyphens.");
}

export async function listBuckets(_asked: Asked, { catalog }: House): Promise<Answer> {
  const buckets = catalog.listBuckets().map(({ name, made }) => branch("Bucket", leaf("Name", name), leaf("CreationDate", new Date(made).toISOString())));
  return xmlAnswer(xmlDocument("ListAllMyBucketsResult", OWNER, branch("Buckets", ...buckets)));
}

export async function createBucket(asked: Asked, { catalog, now }: House): Promise<Answer> {
  refuseName(asked.bucket);
  if (asked.headers["content-length"] !== undefined && asked.headers["content-length"] !== "0") await receiveText(asked);
  await catalog.exclusively(`bucket ${asked.bucket}`, async () => {
    if (catalog.findBucket(asked.bucket)) throw new S3Fault("BucketAlreadyOwnedByYou", "You have this bucket already.");
    await catalog.addBucket(asked.bucket, now());
  });
  return { status: 200, headers: { Location: `/${asked.bucket}` } };
}

export async function headBucket(asked: Asked, { catalog, keys }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  return { status: 200, headers: { "x-amz-bucket-region": keys.region } };
}

export async function deleteBucket(asked: Asked, { catalog }: House): Promise<Answer> {
  await catalog.exclusively(`bucket ${asked.bucket}`, () => catalog.removeBucket(asked.bucket));
  return { status: 204 };
}

export async function getLocation(asked: Asked, { catalog, keys }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  const document = xmlDocument("LocationConstraint", keys.region === "us-east-1" ? "" : keys.region);
  return xmlAnswer(document);
}

export async function putCors(asked: Asked, { catalog }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  const rules = parseCors(await receiveText(asked));
  await catalog.exclusively(`bucket ${asked.bucket}`, () => catalog.setCors(asked.bucket, rules));
  return { status: 200 };
}

export async function getCors(asked: Asked, { catalog }: House): Promise<Answer> {
  const { cors } = catalog.bucketNamed(asked.bucket);
  if (!cors) throw new S3Fault("NoSuchCORSConfiguration", "The CORS configuration does not exist");
  return xmlAnswer(writeCors(cors));
}

export async function deleteCors(asked: Asked, { catalog }: House): Promise<Answer> {
  await catalog.exclusively(`bucket ${asked.bucket}`, () => catalog.setCors(asked.bucket, undefined));
  return { status: 204 };
}

/** One owner may do everything, and nobody else anything. */
export async function getAcl(asked: Asked, house: House): Promise<Answer> {
  const bucket = house.catalog.bucketNamed(asked.bucket);
  if (asked.key !== "" && !bucket.objects.has(asked.key)) throw new S3Fault("NoSuchKey", "The specified key does not exist.");
  const grantee = `<Grantee xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:type="CanonicalUser">${leaf("ID", "spotblue")}${leaf("DisplayName", "spotblue")}</Grantee>`;
  return xmlAnswer(xmlDocument("AccessControlPolicy", OWNER, branch("AccessControlList", branch("Grant", grantee, leaf("Permission", "FULL_CONTROL")))));
}

export async function getVersioning(asked: Asked, { catalog }: House): Promise<Answer> {
  catalog.bucketNamed(asked.bucket);
  return xmlAnswer(xmlDocument("VersioningConfiguration"));
}
