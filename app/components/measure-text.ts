export type LengthUnit = "mm" | "in";

/** Exact since 1959. */
const MM_PER_INCH = 25.4;

/** mm in the unit asked for. */
export function lengthIn(mm: number, unit: LengthUnit): number {
  return unit === "mm" ? mm : mm / MM_PER_INCH;
}

/**
 * What an entry field shows for a stored length: the text itself in mm; in inches twelve
 * digits, which carry any stored value there and back unchanged.
 */
export function lengthEntry(mm: number | string, unit: LengthUnit): string {
  return unit === "mm" ? String(mm) : String(Number(lengthIn(Number(mm), "in").toPrecision(12)));
}

/**
 * A number as it is read: a true minus, no "-0.00".
 *
 * @param digits decimals; undefined shows what the value has, up to six (binary dust goes)
 * @returns "–" for what is no number
 */
export function numberText(value: number, digits?: number, signed = false): string {
  if (!Number.isFinite(value)) return "–";
  const text = digits === undefined ? String(Number(value.toFixed(6))) : value.toFixed(digits);
  const amount = text.replace("-", "");
  if (Number(amount) === 0) return amount;
  return (value < 0 ? "−" : signed ? "+" : "") + amount;
}

/** Groups of three by a thin space from five figures on, as ISO 80000-1 writes numbers. */
export function groupDigits(text: string): string {
  const [whole = "", fraction] = text.split(".");
  const grouped = whole.replace(/\d{5,}/, (figures) => figures.replace(/\B(?=(\d{3})+$)/g, "\u202f"));
  return fraction === undefined ? grouped : `${grouped}.${fraction}`;
}
