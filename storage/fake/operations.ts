import { amz, type Answer, type Asked, type House } from "./asked.ts";
import { createBucket, deleteBucket, deleteCors, getAcl, getCors, getLocation, getVersioning, headBucket, listBuckets, putCors } from "./buckets.ts";
import { postForm } from "./form-post.ts";
import { listObjects } from "./listings.ts";
import { copyObject, deleteObject, deleteObjects, getObject, putObject } from "./objects.ts";
import { S3Fault, type S3Code } from "./s3-fault.ts";
import { abortUpload, beginUpload, completeUpload, copyPart, listParts, listUploads, uploadPart } from "./uploads.ts";

export interface Operation {
  /** As the S3 API calls it. */
  name: string;
  run: (asked: Asked, house: House) => Promise<Answer>;
}

const operation = (name: string, run: Operation["run"]): Operation => ({ name, run });

const onService: Record<string, Operation> = { GET: operation("ListBuckets", listBuckets) };

/** By method, then by the word in the query that makes it another operation; "" without one. */
const onBucket: Record<string, Record<string, Operation>> = {
  GET: {
    "": operation("ListObjects", listObjects), "list-type": operation("ListObjectsV2", listObjects), versions: operation("ListObjectVersions", listObjects),
    uploads: operation("ListMultipartUploads", listUploads), location: operation("GetBucketLocation", getLocation), cors: operation("GetBucketCors", getCors),
    acl: operation("GetBucketAcl", getAcl), versioning: operation("GetBucketVersioning", getVersioning),
  },
  HEAD: { "": operation("HeadBucket", headBucket) },
  PUT: { "": operation("CreateBucket", createBucket), cors: operation("PutBucketCors", putCors) },
  DELETE: { "": operation("DeleteBucket", deleteBucket), cors: operation("DeleteBucketCors", deleteCors) },
  POST: { "": operation("PostObject", postForm), delete: operation("DeleteObjects", deleteObjects) },
};

const onObject: Record<string, Record<string, Operation>> = {
  GET: { "": operation("GetObject", getObject), uploadId: operation("ListParts", listParts), acl: operation("GetObjectAcl", getAcl) },
  HEAD: { "": operation("HeadObject", getObject) },
  PUT: { "": operation("PutObject", putObject), uploadId: operation("UploadPart", uploadPart) },
  POST: { uploads: operation("CreateMultipartUpload", beginUpload), uploadId: operation("CompleteMultipartUpload", completeUpload) },
  DELETE: { "": operation("DeleteObject", deleteObject), uploadId: operation("AbortMultipartUpload", abortUpload) },
};

/** Words in the query that would make a request another one than it looks like without them. */
const OTHER_WORDS = [
  "accelerate", "acl", "analytics", "attributes", "cors", "delete", "encryption", "intelligent-tiering", "inventory", "legal-hold", "lifecycle", "location", "logging", "metrics", "notification",
  "object-lock", "ownershipControls", "policy", "policyStatus", "publicAccessBlock", "renameObject", "replication", "requestPayment", "restore", "retention", "select", "tagging", "torrent", "uploadId", "uploads",
  "versioning", "versions", "website", "list-type",
];

/** Settings that a bucket here never has, and how S3 says so. */
const NEVER_SET: Record<string, S3Code> = {
  policy: "NoSuchBucketPolicy", lifecycle: "NoSuchLifecycleConfiguration", tagging: "NoSuchTagSet", encryption: "ServerSideEncryptionConfigurationNotFoundError",
};

/** Which operation a request means. */
export function operationOf(asked: Pick<Asked, "method" | "bucket" | "key" | "query" | "headers">): Operation {
  const { method, bucket, key, query } = asked;
  const notHere = () => new S3Fault("MethodNotAllowed", "The specified method is not allowed against this resource.");
  if (bucket === "") {
    const found = onService[method];
    if (!found) throw notHere();
    return found;
  }
  const byWord = (key === "" ? onBucket : onObject)[method];
  if (!byWord) throw notHere();
  const words = OTHER_WORDS.filter((word) => query[word] !== undefined);
  const word = words.find((one) => byWord[one]) ?? words[0] ?? "";
  const found = byWord[word];
  if (!found) {
    const never = method === "GET" && key === "" ? NEVER_SET[word] : undefined;
    if (never) throw new S3Fault(never, "There is none.");
    if (word === "") throw notHere();
    throw new S3Fault("NotImplemented", `This store has no ${word}.`);
  }
  if (method === "PUT" && key !== "" && amz(asked as Asked, "x-amz-copy-source") !== undefined) {
    return word === "uploadId" ? operation("UploadPartCopy", copyPart) : operation("CopyObject", copyObject);
  }
  return found;
}
