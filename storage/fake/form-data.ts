import { S3Fault } from "./s3-fault.ts";

/** Of all fields together, as S3 bounds a form without its file. */
const LARGEST_FIELDS = 20 * 1024;

export interface ReadForm {
  /** Fields before the file, names in lower case. */
  fields: Map<string, string>;
  filename: string;
  file: AsyncIterable<Uint8Array>;
}

/**
 * A form of fields with a file at its end (RFC 7578), read without holding the file.
 *
 * @throws S3Fault when it is no such form
 */
export async function readForm(body: AsyncIterable<Uint8Array>, contentType: string): Promise<ReadForm> {
  const [, quoted, plain] = /;\s*boundary=(?:"([^"]{1,70})"|([^\s;]{1,70}))/i.exec(contentType) ?? [];
  const boundary = quoted ?? plain;
  if (!boundary) throw new S3Fault("MalformedPOSTRequest", "The form names no boundary.");
  const source = body[Symbol.asyncIterator]();
  // The first boundary has no line end before it; with one, all look alike.
  let rest = Buffer.from("\r\n");
  const mark = Buffer.from(`\r\n--${boundary}`);
  let read = 0;

  async function more(): Promise<boolean> {
    const { value, done } = await source.next();
    if (done) return false;
    rest = Buffer.concat([rest, value]);
    return true;
  }
  /** Takes what stands before the next such bytes, and them. */
  async function upTo(end: Buffer): Promise<string> {
    for (;;) {
      const at = rest.indexOf(end);
      if (at >= 0) {
        const text = rest.toString("utf8", 0, at);
        rest = rest.subarray(at + end.byteLength);
        read += at;
        if (read > LARGEST_FIELDS) break;
        return text;
      }
      if (rest.byteLength > LARGEST_FIELDS) break;
      if (!(await more())) throw new S3Fault("MalformedPOSTRequest", "The form ends too early.");
    }
    throw new S3Fault("MalformedPOSTRequest", "The fields of the form are too long.");
  }
  async function* file(): AsyncGenerator<Uint8Array> {
    for (;;) {
      const at = rest.indexOf(mark);
      if (at >= 0) {
        if (at > 0) yield rest.subarray(0, at);
        while (!(await source.next()).done);
        return;
      }
      // The boundary may begin in these bytes and end in the next ones.
      const sure = rest.byteLength - mark.byteLength;
      if (sure > 0) {
        yield rest.subarray(0, sure);
        rest = rest.subarray(sure);
      }
      if (!(await more())) throw new S3Fault("MalformedPOSTRequest", "The form ends inside its file.");
    }
  }

  const fields = new Map<string, string>();
  await upTo(mark);
  for (;;) {
    if ((await upTo(Buffer.from("\r\n"))).startsWith("--")) throw new S3Fault("InvalidArgument", "POST requires exactly one file upload per request.");
    const head = await upTo(Buffer.from("\r\n\r\n"));
    const [, name] = /content-disposition:\s*form-data[^\r\n]*;\s*name="([^"]*)"/i.exec(head) ?? [];
    if (name === undefined) throw new S3Fault("MalformedPOSTRequest", "A field of the form has no name.");
    if (name.toLowerCase() === "file") return { fields, filename: /;\s*filename="([^"]*)"/i.exec(head)?.[1] ?? "", file: file() };
    fields.set(name.toLowerCase(), await upTo(mark));
  }
}
