/** Error codes of S3 with the status each is answered with ("Error responses" in the S3 API reference). */
const STATUS = {
  AccessDenied: 403,
  AccessForbidden: 403,
  AuthorizationHeaderMalformed: 400,
  AuthorizationQueryParametersError: 400,
  BadDigest: 400,
  BucketAlreadyOwnedByYou: 409,
  BucketNotEmpty: 409,
  EntityTooLarge: 400,
  EntityTooSmall: 400,
  IncompleteBody: 400,
  InternalError: 500,
  InvalidAccessKeyId: 403,
  InvalidArgument: 400,
  InvalidBucketName: 400,
  InvalidChunkSizeError: 403,
  InvalidDigest: 400,
  InvalidPart: 400,
  InvalidPartOrder: 400,
  InvalidPolicyDocument: 400,
  InvalidRange: 416,
  InvalidRequest: 400,
  InvalidURI: 400,
  KeyTooLongError: 400,
  MalformedPOSTRequest: 400,
  MalformedXML: 400,
  MethodNotAllowed: 405,
  MissingContentLength: 411,
  NoSuchBucket: 404,
  NoSuchBucketPolicy: 404,
  NoSuchCORSConfiguration: 404,
  NoSuchKey: 404,
  NoSuchLifecycleConfiguration: 404,
  NoSuchTagSet: 404,
  NoSuchUpload: 404,
  NoSuchVersion: 404,
  NotImplemented: 501,
  PreconditionFailed: 412,
  RequestTimeTooSkewed: 403,
  ServerSideEncryptionConfigurationNotFoundError: 404,
  SignatureDoesNotMatch: 403,
  SlowDown: 503,
  XAmzContentSHA256Mismatch: 400,
} as const;

export type S3Code = keyof typeof STATUS;

/** A refusal in the words of S3. */
export class S3Fault extends Error {
  readonly code: S3Code;
  readonly status: number;

  constructor(code: S3Code, message: string) {
    super(message);
    this.code = code;
    this.status = STATUS[code];
  }
}
