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
  const parsed = z.strictObject(calculation.inputs.shape).safeParse(inputs);
  if (!parsed.success) {
    const errors: Record<string, string[]> = {};
    for (const issue of parsed.error.issues) {
      const keys = issue.code === "unrecognized_keys" ? issue.keys : [String(issue.path[0] ?? "inputs")];
      for (const key of keys) (errors[key] ??= []).push(issue.code === "unrecognized_keys" ? "is not an input of this calculation" : issue.message);
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

/** What `calculate --list` prints of a calculation: its inputs as JSON schema, with units and defaults in it. */
export function describeCalculation({ kind, title, inputs, sources }: Calculation) {
  return { kind, title, inputs: z.toJSONSchema(inputs, { io: "input" }), sources };
}
