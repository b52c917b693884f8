import { z } from "zod";
import { InputFault, type Calculation, type CalculationResult } from "./calculation.ts";
import { fit } from "./fit.ts";
import { threadEngagement } from "./thread-engagement.ts";

/** Every calculation, in the order in which a shop meets them. */
export const calculations: readonly Calculation[] = [threadEngagement, fit] as unknown as readonly Calculation[];

export function findCalculation(kind: string): Calculation | undefined {
  return calculations.find((one) => one.kind === kind);
}

export type RunOutcome = { ok: true; result: CalculationResult; inputs: Record<string, unknown> } | { ok: false; errors: Record<string, string[]> };

/** Runs a calculation on inputs of unknown origin; faults come back by key. */
export function runCalculation(kind: string, inputs: unknown): RunOutcome {
  const calculation = findCalculation(kind);
  if (!calculation) return { ok: false, errors: { kind: [`no calculation is called ${kind}`] } };
  if (typeof inputs !== "object" || inputs === null || Array.isArray(inputs)) return { ok: false, errors: { inputs: ["must be an object with a value for each key"] } };
  const parsed = z.strictObject(calculation.inputs.shape).safeParse(inputs);
  if (!parsed.success) {
    const errors: Record<string, string[]> = {};
    for (const issue of parsed.error.issues) {
      const keys = issue.code === "unrecognized_keys" ? issue.keys : [String(issue.path[0] ?? "inputs")];
      for (const key of keys) (errors[key] ??= []).push(issue.code === "unrecognized_keys" ? unknownKey(key, Object.keys(calculation.inputs.shape)) : issue.message);
    }
    return { ok: false, errors };
  }
  try {
    return { ok: true, result: calculation.run(parsed.data), inputs: parsed.data };
  } catch (fault) {
    if (fault instanceof InputFault) return { ok: false, errors: { [fault.key]: [fault.message] } };
    throw fault;
  }
}

/** True for a calculation that never passes or fails: it can't be asked of a part at the gate. */
export function isInformationOnly(kind: string): boolean {
  return findCalculation(kind)?.informationOnly ?? false;
}

/** A key that is no input: in another unit or spelling it often is one. */
function unknownKey(key: string, known: string[]): string {
  const stem = (text: string) => text.split("_")[0]!.toLowerCase();
  const meant = known.find((one) => stem(one) === stem(key));
  return `is not an input of this calculation${meant ? `: did you mean ${meant}?` : ""}`;
}

/** What `calculate --list` prints of a calculation: its inputs as JSON schema, with units and defaults in it. */
export function describeCalculation({ kind, title, inputs, sources }: Calculation) {
  return { kind, title, inputs: z.toJSONSchema(z.strictObject(inputs.shape), { io: "input" }), sources };
}
