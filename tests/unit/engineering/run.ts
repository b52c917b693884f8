import { runCalculation } from "#app/engineering/registry.ts";

/** The result document; a refusal fails the test with its reasons. */
export function resultOf(kind: string, inputs: unknown) {
  const outcome = runCalculation(kind, inputs);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.errors));
  return outcome.result;
}

/** The keys that a refusal names; none when it runs. */
export function refusedKeys(kind: string, inputs: unknown): string[] {
  const outcome = runCalculation(kind, inputs);
  return outcome.ok ? [] : Object.keys(outcome.errors);
}
