import { text } from "node:stream/consumers";
import type { z } from "zod";
import { evaluateGate } from "#app/domain/gate.ts";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { gateRecords } from "#app/domain/gate-records.ts";

/** `npm run -s gate [-- --example] < records.json`; output and errors as the command-line contract says. */
async function main(args: string[]): Promise<void> {
  const [option, ...more] = args;
  if (option === "--example" && more.length === 0) return print(exampleGateRecords);
  if (option !== undefined) return refuse(`unknown option ${JSON.stringify(more[0] ?? option)}: only --example is known; records are read from standard input`);
  if (process.stdin.isTTY) return refuse("no records came in: pipe a records document in, or see one with --example");

  const input = await text(process.stdin);
  if (input.trim() === "") return refuse("the input is empty: pipe a records document in, or see one with --example");
  let document: unknown;
  try {
    document = JSON.parse(input.replace(/^\uFEFF/, ""));
  } catch (error) {
    return refuse(`the input is not JSON: ${oneLine((error as SyntaxError).message)}`);
  }
  const parsed = gateRecords.safeParse(document);
  if (!parsed.success) return refuse(firstFault(parsed.error));
  try {
    print(evaluateGate(parsed.data, new Date()));
  } catch (error) {
    // Text that has no UTF-8 form can't be hashed; the message says where it stands.
    if (!(error instanceof TypeError || error instanceof RangeError)) throw error;
    refuse(oneLine(error.message));
  }
}

function print(document: unknown): void {
  process.stdout.write(`${JSON.stringify(document, null, 2)}\n`);
}

function refuse(message: string): void {
  process.stderr.write(`gate: ${message}\n`);
  process.exitCode = 2;
}

/** The first fault with the key it is at, and how many more there are. */
function firstFault({ issues }: z.ZodError): string {
  const [issue] = issues;
  if (issue === undefined) return "the records are not usable";
  const unknown = issue.code === "unrecognized_keys" ? issue.keys[0] : undefined;
  const key = keyInWords(unknown === undefined ? issue.path : [...issue.path, unknown]);
  const missing = issue.code === "invalid_type" && issue.message.endsWith("received undefined");
  const fault = unknown !== undefined ? "is not a key of the records" : missing ? "is missing" : oneLine(issue.message);
  const rest = issues.length > 1 ? ` (and ${issues.length - 1} more)` : "";
  return `${key}: ${fault}${rest}`;
}

function keyInWords(path: readonly PropertyKey[]): string {
  if (path.length === 0) return "the document";
  return path.map((step, index) => (typeof step === "number" ? `[${step}]` : `${index === 0 ? "" : "."}${String(step)}`)).join("");
}

function oneLine(message: string): string {
  return message.replace(/\s+/g, " ").trim();
}

await main(process.argv.slice(2));
