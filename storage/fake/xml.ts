import { parseXML } from "@aws-sdk/xml-builder";
import { S3Fault } from "./s3-fault.ts";

const NAMESPACE = "http://s3.amazonaws.com/doc/2006-03-01/";
const NAMED: Record<string, string> = { "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;" };

/** Text as it may stand in an element, line ends and control characters included. */
function escapeText(text: string): string {
  return text.replace(/[&<>"\u0000-\u001f\u007f]/g, (c) => NAMED[c] ?? `&#x${c.charCodeAt(0).toString(16)};`);
}

/** An element around text. */
export function leaf(name: string, text: string | number | boolean): string {
  return `<${name}>${escapeText(String(text))}</${name}>`;
}

/** An element around others; what is undefined is left out. */
export function branch(name: string, ...children: Array<string | undefined>): string {
  return `<${name}>${children.join("")}</${name}>`;
}

export function xmlDocument(root: string, ...children: Array<string | undefined>): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n<${root} xmlns="${NAMESPACE}">${children.join("")}</${root}>`;
}

export function errorDocument(code: string, message: string, resource: string, requestId: string): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${branch("Error", leaf("Code", code), leaf("Message", message), leaf("Resource", resource), leaf("RequestId", requestId))}`;
}

export type Parsed = string | { [name: string]: Parsed | Parsed[] };

/** The root element that a client sent; refused as MalformedXML when it is another one or none. */
export function parseRoot(text: string, root: string): { [name: string]: Parsed | Parsed[] } {
  let parsed: Record<string, Parsed>;
  try {
    parsed = parseXML(text) as Record<string, Parsed>;
  } catch {
    throw new S3Fault("MalformedXML", "The XML you provided was not well-formed.");
  }
  const found = parsed[root];
  if (found === undefined || Array.isArray(found)) throw new S3Fault("MalformedXML", `The document must be one ${root}.`);
  return typeof found === "string" ? {} : found;
}

/** All elements of that name below a parsed one. */
export function elements(of: Parsed, name: string): Parsed[] {
  const found = typeof of === "string" ? undefined : of[name];
  return found === undefined ? [] : Array.isArray(found) ? found : [found];
}

/** Text of the first element of that name; undefined without one. */
export function textOf(of: Parsed, name: string): string | undefined {
  const [first] = elements(of, name);
  return typeof first === "string" ? first : undefined;
}
