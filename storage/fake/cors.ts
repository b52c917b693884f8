import type { CorsRule } from "./catalog.ts";
import { S3Fault } from "./s3-fault.ts";
import { branch, elements, leaf, parseRoot, textOf, xmlDocument } from "./xml.ts";

/** The rules of a bucket for pages of other origins, as S3 clients write them. */
export function parseCors(text: string): CorsRule[] {
  const rules = elements(parseRoot(text, "CORSConfiguration"), "CORSRule").map((rule) => {
    const texts = (name: string) => elements(rule, name).filter((value) => typeof value === "string");
    const maxAge = textOf(rule, "MaxAgeSeconds");
    return { origins: texts("AllowedOrigin"), methods: texts("AllowedMethod"), headers: texts("AllowedHeader"), expose: texts("ExposeHeader"), maxAgeSeconds: maxAge === undefined ? undefined : Number(maxAge) };
  });
  const sound = rules.every(({ origins, methods, maxAgeSeconds }) =>
    origins.length > 0 && origins.every((origin) => origin.split("*").length <= 2) &&
    methods.length > 0 && methods.every((method) => ["GET", "PUT", "HEAD", "POST", "DELETE"].includes(method)) &&
    (maxAgeSeconds === undefined || Number.isInteger(maxAgeSeconds)));
  if (rules.length === 0 || rules.length > 100 || !sound) throw new S3Fault("MalformedXML", "Each CORS rule needs an origin with one asterisk at most, and methods out of GET, PUT, HEAD, POST, DELETE.");
  return rules;
}

export function writeCors(rules: readonly CorsRule[]): string {
  return xmlDocument("CORSConfiguration", ...rules.map(({ origins, methods, headers, expose, maxAgeSeconds }) =>
    branch("CORSRule",
      ...origins.map((text) => leaf("AllowedOrigin", text)), ...methods.map((text) => leaf("AllowedMethod", text)),
      ...headers.map((text) => leaf("AllowedHeader", text)), ...expose.map((text) => leaf("ExposeHeader", text)),
      maxAgeSeconds === undefined ? undefined : leaf("MaxAgeSeconds", maxAgeSeconds))));
}

function fits(pattern: string, text: string): boolean {
  const [start = "", end] = pattern.split("*");
  return end === undefined ? pattern === text : text.length >= start.length + end.length && text.startsWith(start) && text.endsWith(end);
}

/** Headers that let the page of this origin read the answer; none when no rule fits. */
export function corsHeaders(rules: readonly CorsRule[] | undefined, origin: string | undefined, method: string): Record<string, string> {
  if (origin === undefined || !rules) return {};
  const rule = rules.find(({ origins, methods }) => methods.includes(method) && origins.some((pattern) => fits(pattern, origin)));
  if (!rule) return {};
  const anybody = rule.origins.includes("*");
  return {
    "Access-Control-Allow-Origin": anybody ? "*" : origin,
    ...(anybody ? {} : { "Access-Control-Allow-Credentials": "true" }),
    "Access-Control-Allow-Methods": rule.methods.join(", "),
    ...(rule.expose.length > 0 ? { "Access-Control-Expose-Headers": rule.expose.join(", ") } : {}),
    ...(rule.maxAgeSeconds === undefined ? {} : { "Access-Control-Max-Age": String(rule.maxAgeSeconds) }),
    Vary: "Origin, Access-Control-Request-Headers, Access-Control-Request-Method",
  };
}

/** Answers the question a browser asks before it sends; such a question is not signed. */
export function preflightHeaders(rules: readonly CorsRule[] | undefined, asked: { origin?: string | undefined; method?: string | undefined; headers?: string | undefined }): Record<string, string> {
  if (!asked.origin || !asked.method) throw new S3Fault("InvalidRequest", "A preflight request names its Origin and Access-Control-Request-Method.");
  const wanted = (asked.headers ?? "").split(",").map((name) => name.trim().toLowerCase()).filter((name) => name !== "");
  const may = rules?.filter(({ headers }) => wanted.every((name) => headers.some((pattern) => fits(pattern.toLowerCase(), name))));
  const found = corsHeaders(may, asked.origin, asked.method);
  if (Object.keys(found).length === 0) throw new S3Fault("AccessForbidden", "CORSResponse: This CORS request is not allowed.");
  return { ...found, ...(wanted.length > 0 ? { "Access-Control-Allow-Headers": wanted.join(", ") } : {}) };
}
