import { text } from "node:stream/consumers";
import { calculations, describeCalculation, runCalculation } from "#app/engineering/registry.ts";

/** `npm run -s calculate -- --list` and `npm run -s calculate -- KIND < inputs.json`, as the command-line contract says. */
async function main([kind, ...more]: string[]): Promise<void> {
  const known = calculations.map((one) => one.kind).join(", ");
  if (kind === undefined) return refuse(`name a calculation (${known}), or --list`);
  if (more.length > 0) return refuse(`one calculation at a time: ${JSON.stringify(more[0])} is too much`);
  if (kind === "--list") return print(calculations.map(describeCalculation));
  if (!calculations.some((one) => one.kind === kind)) return refuse(`no calculation is called ${JSON.stringify(kind)}; there are ${known}`);
  if (process.stdin.isTTY) return refuse("no inputs came in: pipe a JSON document in, or see --list");
  const input = await text(process.stdin);
  let inputs: unknown;
  try {
    inputs = JSON.parse(input.replace(/^\uFEFF/, ""));
  } catch (error) {
    return refuse(`the input is not JSON: ${(error as SyntaxError).message.replace(/\s+/g, " ")}`);
  }
  const outcome = runCalculation(kind, inputs);
  if (!outcome.ok) {
    const [key, messages] = Object.entries(outcome.errors)[0]!;
    const rest = Object.keys(outcome.errors).length - 1;
    return refuse(`${key}: ${messages[0]}${rest > 0 ? ` (and ${rest} more)` : ""}`);
  }
  print(outcome.result);
}

function print(document: unknown): void {
  process.stdout.write(`${JSON.stringify(document, null, 2)}\n`);
}

function refuse(message: string): void {
  process.stderr.write(`calculate: ${message}\n`);
  process.exitCode = 2;
}

await main(process.argv.slice(2));
