/** Exactly, by the definition of 1959, as is the pound below. */
export const MM_PER_INCH = 25.4;
export const KG_PER_POUND = 0.45359237;
/** Standard gravity, 3rd General Conference on Weights and Measures, 1901: what makes a pound a force. */
export const STANDARD_GRAVITY_M_S2 = 9.80665;
export const N_PER_POUND_FORCE = KG_PER_POUND * STANDARD_GRAVITY_M_S2;
export const MPA_PER_PSI = N_PER_POUND_FORCE / MM_PER_INCH ** 2;
export const NM_PER_POUND_FOOT = (N_PER_POUND_FORCE * 12 * MM_PER_INCH) / 1000;

export type LengthUnit = "mm" | "in";

/** Lengths nearer than this are one length: a nanometre, far below anything a shop measures, far above binary rounding. */
export const LENGTH_RESOLUTION_MM = 1e-6;

export const toMm = (value: number, unit: LengthUnit): number => (unit === "in" ? value * MM_PER_INCH : value);

export const fromMm = (mm: number, unit: LengthUnit): number => (unit === "in" ? mm / MM_PER_INCH : mm);

/**
 * A length for a sentence: "12.7 mm", "0.5 in".
 *
 * @param digits most decimals in mm, inches get two more, which is the same fineness; zeros at the end are left out
 */
export function lengthText(mm: number, unit: LengthUnit = "mm", digits = 4): string {
  return `${Number(fromMm(mm, unit).toFixed(unit === "in" ? digits + 2 : digits))} ${unit}`;
}

export type ParsedLength = { ok: true; mm: number } | { ok: false; reason: string };

/**
 * What length was typed? Reads "12.7", "12,7", "7/8", "1 1/4 in", "0.5\"", "-3 mm"; a unit of its
 * own wins over the one the field shows.
 *
 * @param unit what a number without a unit is in
 * @returns mm, exact to double precision, or why it can't be read, for a person
 */
export function parseLength(text: string, unit: LengthUnit): ParsedLength {
  const typed = splitTyped(text);
  const unitTyped = typed && (typed.unit === "" ? unit : lengthUnits[typed.unit]);
  if (!typed || !unitTyped) return { ok: false, reason: "This is not a length. Type 12.7, 7/8 in or 3 mm" };
  if (typeof typed.value === "string") return { ok: false, reason: typed.value };
  return { ok: true, mm: toMm(typed.value, unitTyped) };
}

export type ParsedQuantity = { ok: true; value: number } | { ok: false; reason: string };

/**
 * What quantity was typed? A bare number is in the unit asked for; "145 psi", "45 ksi", "12 lbf",
 * "10 lb-ft", "180 °F", "3/8 in" are converted to it.
 *
 * @param unit what the value is wanted in; one that is not known here takes bare numbers only
 * @returns value in that unit, or why it can't be read, for a person
 */
export function parseQuantity(text: string, unit: string): ParsedQuantity {
  const typed = splitTyped(text);
  if (!typed) return { ok: false, reason: `This is not a number${unit ? ` in ${unit}` : ""}` };
  if (typeof typed.value === "string") return { ok: false, reason: typed.value };
  if (typed.unit === "" || typed.unit === plainUnit(unit)) return { ok: true, value: typed.value };
  const convert = conversions[unit]?.[typed.unit];
  if (!convert) return { ok: false, reason: `Give it in ${unit || "a bare number"}: ${typed.unit} can't be turned into that` };
  return { ok: true, value: typeof convert === "number" ? typed.value * convert : convert(typed.value) };
}

const decimal = String.raw`\d+(?:[.,]\d*)?(?:e[+-]?\d+)?|[.,]\d+`;
const typedPattern = new RegExp(String.raw`^([+−-])?\s*(?:(?<whole>\d+)[\s-]+(?<wholeTop>\d+)\s*\/\s*(?<wholeBottom>\d+)|(?<top>\d+)\s*\/\s*(?<bottom>\d+)|(?<number>${decimal}))\s*(?<unit>[a-z°"″'%²·⋅/ -]*[a-z"″'²%])?$`, "i");

/** The number as typed and the unit behind it, in small letters without spaces and dots; for a number that can't be, why. */
function splitTyped(text: string): { value: number | string; unit: string } | undefined {
  const found = typedPattern.exec(text.trim());
  if (!found?.groups) return undefined;
  const { whole, wholeTop, wholeBottom, top, bottom, number, unit = "" } = found.groups;
  const divisor = wholeBottom ?? bottom;
  const size = number !== undefined ? Number(number.replace(",", ".")) : whole !== undefined ? Number(whole) + Number(wholeTop) / Number(wholeBottom) : Number(top) / Number(bottom);
  const value = divisor !== undefined && Number(divisor) === 0 ? "A fraction can't be divided by zero" : !Number.isFinite(size) ? "This number is too large" : found[1] && found[1] !== "+" ? -size : size;
  return { value, unit: plainUnit(unit) };
}

const plainUnit = (unit: string) => unit.toLowerCase().replace(/[\s·⋅.-]/g, "").replace("²", "2").replace("″", '"').replace("''", '"');

const lengthUnits: Record<string, LengthUnit> = {
  mm: "mm", millimeter: "mm", millimeters: "mm", millimetre: "mm", millimetres: "mm",
  in: "in", inch: "in", inches: "in", '"': "in",
};

/** Wanted unit → typed unit → factor, or rule where zero is not zero. */
const conversions: Record<string, Record<string, number | ((value: number) => number)>> = {
  mm: Object.fromEntries(Object.entries(lengthUnits).map(([name, said]) => [name, toMm(1, said)])),
  MPa: { psi: MPA_PER_PSI, ksi: 1000 * MPA_PER_PSI, bar: 0.1, kpa: 0.001, gpa: 1000, "n/mm2": 1 },
  N: { kn: 1000, lbf: N_PER_POUND_FORCE, lb: N_PER_POUND_FORCE, kgf: STANDARD_GRAVITY_M_S2 },
  Nm: { lbft: NM_PER_POUND_FOOT, lbfft: NM_PER_POUND_FOOT, ftlb: NM_PER_POUND_FOOT, ftlbf: NM_PER_POUND_FOOT, inlb: NM_PER_POUND_FOOT / 12, lbin: NM_PER_POUND_FOOT / 12, inlbf: NM_PER_POUND_FOOT / 12, ncm: 0.01 },
  kg: { g: 0.001, lb: KG_PER_POUND, lbs: KG_PER_POUND, oz: KG_PER_POUND / 16 },
  "°C": { c: 1, "°f": celsius, f: celsius, k: (kelvin) => kelvin - 273.15 },
};

function celsius(fahrenheit: number): number {
  return ((fahrenheit - 32) * 5) / 9;
}
