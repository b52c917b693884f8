import { z } from "zod";

export type Verdict = "pass" | "fail" | "information";

export interface Step {
  name: string;
  value: number;
  unit: string;
  formula: string;
}

/** What a calculation gives: result, every value on the way, verdict, and where the formula is from. */
export interface CalculationResult {
  kind: string;
  verdict: Verdict;
  /** How much is left to the limit that decides; negative when it is passed. */
  room: { value: number; unit: string } | null;
  results: Record<string, unknown>;
  steps: Step[];
  remarks: string[];
  cautions: string[];
  sources: string[];
}

export interface Calculation<Schema extends z.ZodObject = z.ZodObject> {
  kind: string;
  title: string;
  /** What it answers, as a person would ask it. */
  question: string;
  inputs: Schema;
  sources: string[];
  /** @throws RangeError, with the key it names, for inputs that fit the schema and make no sense together */
  run(inputs: z.output<Schema>): CalculationResult;
}

/** An input that fits its schema and makes no sense; names its key. */
export class InputFault extends RangeError {
  override name = "InputFault";
  readonly key: string;

  constructor(key: string, message: string) {
    super(message);
    this.key = key;
  }
}

/** A check, not an approval: the first caution of every calculation. */
export const CHECK_CAUTION = "A check, not an approval: local codes, the suppliers' data and licensed engineering practice come first.";

/** A positive number with its unit and what it means, for schema and form. */
export const positive = (description: string, unit: string) => z.number({ error: `give ${description}` }).positive("must be above zero").meta({ description, unit });
export const atLeastZero = (description: string, unit: string) => z.number({ error: `give ${description}` }).nonnegative("must not be below zero").meta({ description, unit });
export const anyNumber = (description: string, unit: string) => z.number({ error: `give ${description}` }).meta({ description, unit });
export const words = (description: string) => z.string({ error: `give ${description}` }).trim().min(1, `give ${description}`).meta({ description });
/** A limit [low, high]. */
export const pair = (description: string, unit: string) =>
  z
    .tuple([z.number(), z.number()], { error: `give ${description} as [low, high]` })
    .refine(([low, high]) => low <= high, "low must not be above high")
    .meta({ description, unit });
