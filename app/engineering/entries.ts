import { parseQuantity } from "../units.ts";
import { describeCalculation, findCalculation } from "./registry.ts";
import { threadDesignations } from "./thread-table.ts";
import { materials } from "./tables/materials.ts";

/** One input of a calculation as a form asks for it. */
export interface Entry {
  key: string;
  label: string;
  unit: string;
  kind: "number" | "pair" | "text" | "choice" | "tick";
  optional: boolean;
  default: string;
  /** Where a default comes from, or what may be given in its place. */
  hint: string;
  choices: string[];
}

interface Property {
  type?: string;
  description?: string;
  unit?: string;
  default?: unknown;
  origin?: string;
  note?: string;
  enum?: string[];
}

/** The inputs of a calculation in their order, from its schema: one form serves every calculation. */
export function entriesOf(kind: string): Entry[] {
  const calculation = findCalculation(kind);
  if (!calculation) return [];
  const { properties = {}, required = [] } = describeCalculation(calculation).inputs as { properties?: Record<string, Property>; required?: string[] };
  return Object.entries(properties).map(([key, property]) => ({
    key,
    label: (property.description ?? key).replace(/^the /, "").replace(/^./, (c) => c.toUpperCase()),
    unit: property.unit ?? "",
    kind: kindOf(key, property),
    optional: !required.includes(key),
    default: property.default === undefined ? "" : String(property.default),
    hint: [property.origin ? `Unless stated: ${property.origin}` : "", property.note ?? ""].filter(Boolean).join(". "),
    choices: key === "thread" ? [...threadDesignations] : /material$/i.test(key) ? materials.map(({ code }) => code) : (property.enum ?? []),
  }));
}

function kindOf(key: string, { type, enum: choices }: Property): Entry["kind"] {
  if (/material$/i.test(key) || choices) return "choice";
  if (type === "array") return "pair";
  if (type === "boolean") return "tick";
  return type === "string" ? "text" : "number";
}

/**
 * What was typed, as the inputs of the calculation: blanks left out, numbers as numbers in the
 * input's unit ("7/8 in", "45 ksi" and "12,7" are understood), "62 .. 62.03" or "62 to 62.03" as a pair.
 */
export function readEntries(kind: string, typed: Record<string, string>): Record<string, unknown> {
  const inputs: Record<string, unknown> = {};
  for (const { key, kind: shape, unit } of entriesOf(kind)) {
    const text = (typed[key] ?? "").trim();
    if (shape === "tick") inputs[key] = text !== "";
    else if (text === "") continue;
    else if (shape === "number") inputs[key] = readNumber(text, unit);
    else if (shape === "pair") inputs[key] = readPair(text, unit);
    else inputs[key] = text;
  }
  return inputs;
}

/** A stored input as it is typed. */
export function entryText(value: unknown): string {
  return Array.isArray(value) ? value.join(" to ") : value === undefined || value === null ? "" : String(value);
}

function readPair(text: string, unit: string): Array<number | string> {
  const ends = text.split(/\s*(?:\.\.|;|\bto\b)\s*/);
  // "1/8 to 3/16 in" means inches twice.
  const said = /[a-z°"″].*$/i.exec(ends.at(-1)!)?.[0] ?? "";
  return ends.map((end) => readNumber(/[a-z°"″]/i.test(end) ? end : `${end} ${said}`, unit));
}

// What is no number is handed on as it is: the calculation refuses it by its key.
function readNumber(text: string, unit: string): number | string {
  const parsed = parseQuantity(text, unit);
  return parsed.ok ? parsed.value : text;
}
