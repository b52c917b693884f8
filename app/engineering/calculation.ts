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
  /** True where no limit exists to judge by, whatever is given. */
  informationOnly?: boolean;
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

/** Where a default is a habit of the trade that no standard states. */
export const COMMON_PRACTICE = "common practice, no source";

type Described = { description: string; unit?: string };

/** What a number that is missing, of another type or not finite is answered with. */
const numberFault =
  ({ description, unit }: Described) =>
  ({ input }: { input?: unknown }) =>
    input === undefined ? `give ${description}` : `must be a number${unit ? ` in ${unit}` : ""}: ${description}`;

/** A number with its unit and what it means, for schema and form; beyond `most` it is taken for a slip or another unit. */
export function anyNumber(description: string, unit: string, { least, most }: { least?: number; most?: number } = {}) {
  const known = { description, unit };
  let schema = z.number({ error: numberFault(known) });
  if (least !== undefined) schema = schema.min(least, `must be at least ${least}${unit && ` ${unit}`}`);
  if (most !== undefined) schema = schema.max(most, `must be at most ${most}${unit && ` ${unit}`}: is it in another unit?`);
  return schema.meta(known);
}

export const positive = (description: string, unit: string, { most }: { most: number }) => {
  const known = { description, unit };
  return z.number({ error: numberFault(known) }).positive("must be above zero").max(most, `must be at most ${most}${unit && ` ${unit}`}: is it in another unit?`).meta(known);
};

export const atLeastZero = (description: string, unit: string, { most }: { most: number }) => {
  const known = { description, unit };
  return z.number({ error: numberFault(known) }).nonnegative("must not be below zero").max(most, `must be at most ${most}${unit && ` ${unit}`}: is it in another unit?`).meta(known);
};

export const words = (description: string) => z.string({ error: `give ${description}` }).trim().min(1, `give ${description}`).max(100, "must be at most 100 characters").meta({ description });

const pairFault = { error: "must be two numbers, [low, high]" };

/** A limit [low, high]. */
export const pair = (description: string, unit: string) =>
  z
    .tuple([z.number(pairFault), z.number(pairFault)], { error: `give ${description} as [low, high]${unit && `, in ${unit}`}` })
    .refine(([low, high]) => low <= high, "low must not be above high")
    .meta({ description, unit });

/** An input that may be left out: its value then, and where that value comes from, for schema, form and remark. */
export function byDefault<Schema extends z.ZodType>(schema: Schema, value: z.output<Schema>, origin: string) {
  return schema.default(value as never).meta({ ...schema.meta(), origin });
}
