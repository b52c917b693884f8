/** Exactly, by the definition of 1959. */
export const MM_PER_INCH = 25.4;

export type LengthUnit = "mm" | "in";

/** Lengths nearer than this are one length: a nanometre, far below anything a shop measures, far above binary rounding. */
export const LENGTH_RESOLUTION_MM = 1e-6;

export const toMm = (value: number, unit: LengthUnit): number => (unit === "in" ? value * MM_PER_INCH : value);

export const fromMm = (mm: number, unit: LengthUnit): number => (unit === "in" ? mm / MM_PER_INCH : mm);

export type ParsedLength = { ok: true; mm: number } | { ok: false; reason: string };

const decimal = String.raw`\d+(?:[.,]\d*)?|[.,]\d+`;
const lengthPattern = new RegExp(String.raw`^([+-])?\s*(?:(?<whole>\d+)[\s-]+(?<wholeTop>\d+)\s*\/\s*(?<wholeBottom>\d+)|(?<top>\d+)\s*\/\s*(?<bottom>\d+)|(?<number>${decimal}))\s*(?<unit>mm|millimet(?:er|re)s?|in|inch(?:es)?|"|″|'')?$`, "i");

/**
 * What length was typed? Reads "12.7", "12,7", "7/8", "1 1/4 in", "0.5\"", "-3 mm"; a unit of its
 * own wins over the one the field shows.
 *
 * @param unit what a number without a unit is in
 * @returns mm, exact to double precision, or why it can't be read, for a person
 */
export function parseLength(text: string, unit: LengthUnit): ParsedLength {
  const found = lengthPattern.exec(text.trim());
  if (!found?.groups) return { ok: false, reason: "This is not a length. Type 12.7, 7/8 in or 3 mm" };
  const { whole, wholeTop, wholeBottom, top, bottom, number, unit: typed } = found.groups;
  const divisor = wholeBottom ?? bottom;
  if (divisor !== undefined && Number(divisor) === 0) return { ok: false, reason: "A fraction can't be divided by zero" };
  const value = number !== undefined ? Number(number.replace(",", ".")) : whole !== undefined ? Number(whole) + Number(wholeTop) / Number(wholeBottom) : Number(top) / Number(bottom);
  if (!Number.isFinite(value)) return { ok: false, reason: "This length is too large" };
  const signed = found[1] === "-" ? -value : value;
  const said: LengthUnit = typed === undefined ? unit : /^m/i.test(typed) ? "mm" : "in";
  return { ok: true, mm: toMm(signed, said) };
}
