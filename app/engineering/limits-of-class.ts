import { holeJ_um, internationalTolerance_um, shaftDeviation_um, shaftFineDeviation_um, shaftJ_um, sizeBounds_mm, subBounds_mm } from "./tables/limits-and-fits.ts";

export interface ClassLimits {
  kind: "hole" | "shaft";
  lower_mm: number;
  upper_mm: number;
}

const column = (bounds: readonly number[], size: number) => bounds.findIndex((bound) => size <= bound);

/** Classes that mirror with Δ up to IT8; the letters after them in the alphabet do up to IT7. */
const MIDDLE = "kmn";
/** The standard gives Δ, and with it holes K and beyond, from this grade on. */
const FIRST_GRADE_WITH_DELTA = 3;

/**
 * The limits of a hole or shaft by its ISO 286 class, such as 25 H7 or 25 g6.
 *
 * @param nominal_mm over 0, up to 500
 * @param text letter and grade; a capital is a hole. C to H, J, JS, K, M, N, P, R to U, X and their shafts
 * @returns undefined outside the tables: nothing is worked out between or beyond them
 */
export function limitsOfClass(nominal_mm: number, text: string): ClassLimits | undefined {
  const found = /^\s*(js|[c-hjkmnprstux]|JS|[C-HJKMNPRSTUX])\s*(0?[01]|[1-9]\d?)\s*$/.exec(text);
  if (!found || !(nominal_mm > 0 && nominal_mm <= 500)) return undefined;
  const letter = found[1]!;
  const grade = found[2]!;
  const tolerance = toleranceOf(nominal_mm, grade);
  if (tolerance === undefined) return undefined;
  const isHole = letter === letter.toUpperCase();
  const lower = isHole ? holeLower(nominal_mm, letter.toLowerCase(), grade, tolerance) : shaftLower(nominal_mm, letter, grade, tolerance);
  if (lower === undefined) return undefined;
  // Micrometres are added as micrometres, so that 25 + 21 µm is 25.021 and not 25.020999….
  const at = (deviation: number) => Number((nominal_mm + deviation / 1000).toFixed(7));
  return { kind: isHole ? "hole" : "shaft", lower_mm: at(lower), upper_mm: at(lower + tolerance) };
}

/** Standard tolerance in µm; IT14 and coarser have no meaning up to 1 mm (ISO 286-1, table 1). */
function toleranceOf(nominal: number, grade: string | number): number | undefined {
  if (nominal <= 1 && Number(grade) >= 14) return undefined;
  return internationalTolerance_um[`IT${grade}`]?.[column(sizeBounds_mm, nominal)];
}

/** Fundamental deviation of a shaft in µm: es up to h, ei from k on. */
function shaftDeviation(nominal: number, letter: string): number | undefined {
  const fine = shaftFineDeviation_um[letter];
  return fine ? (fine[column(subBounds_mm, nominal)] ?? undefined) : shaftDeviation_um[letter]?.[column(sizeBounds_mm, nominal)];
}

function shaftLower(nominal: number, letter: string, grade: string, tolerance: number): number | undefined {
  if (letter === "js") return -tolerance / 2;
  if (letter === "j") return shaftJ_um[`j${grade}`]?.[column(sizeBounds_mm, nominal)];
  const deviation = shaftDeviation(nominal, letter);
  if (deviation === undefined) return undefined;
  if (letter <= "h") return deviation - tolerance;
  return letter === "k" && !/^[4-7]$/.test(grade) ? 0 : deviation;
}

// ISO 286-1, 4.3.2.5: holes mirror shafts, with Δ for K to N up to IT8 and P and above up to IT7.
function holeLower(nominal: number, letter: string, grade: string, tolerance: number): number | undefined {
  if (letter === "js") return -tolerance / 2;
  if (letter === "j") {
    const upper = holeJ_um[`J${grade}`]?.[column(sizeBounds_mm, nominal)];
    return upper === undefined ? undefined : upper - tolerance;
  }
  const shaft = shaftDeviation(nominal, letter);
  if (shaft === undefined) return undefined;
  if (letter <= "h") return shaft === 0 ? 0 : -shaft;
  const number = grade.startsWith("0") ? 0 : Number(grade);
  if (number < FIRST_GRADE_WITH_DELTA) return undefined;
  if (number > (MIDDLE.includes(letter) ? 8 : 7)) {
    if (letter === "k") return nominal <= 3 ? -tolerance : undefined;
    if (letter === "n") return nominal <= 1 ? undefined : (nominal <= 3 ? -4 : 0) - tolerance;
    return -shaft - tolerance;
  }
  // The one entry of the table that the rule does not give.
  if (letter === "m" && number === 6 && nominal > 250 && nominal <= 315) return -9 - tolerance;
  const delta = nominal <= 3 ? 0 : tolerance - toleranceOf(nominal, number - 1)!;
  return -shaft + delta - tolerance;
}
