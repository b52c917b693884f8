import { internationalTolerance_um, shaftDeviation_um, shaftR_um, shaftS_um, sizeBounds_mm, subBounds_mm } from "./tables/limits-and-fits.ts";

export interface ClassLimits {
  kind: "hole" | "shaft";
  lower_mm: number;
  upper_mm: number;
}

const column = (bounds: readonly number[], size: number) => bounds.findIndex((bound) => size <= bound);

/**
 * The limits of a hole or shaft by its ISO 286 class, such as 25 H7 or 25 g6.
 *
 * @param nominal_mm over 0, up to 500
 * @param text letter and grade; a capital is a hole. D to H, JS, K, M, N, P, R, S and their shafts
 * @returns undefined outside the tables: nothing is worked out between or beyond them
 */
export function limitsOfClass(nominal_mm: number, text: string): ClassLimits | undefined {
  const found = /^\s*(js|JS|[d-hk-npr-sD-HK-NPR-S])\s*(\d{1,2})\s*$/.exec(text);
  if (!found || !(nominal_mm > 0 && nominal_mm <= 500)) return undefined;
  const letter = found[1]!;
  const grade = Number(found[2]);
  const tolerance = toleranceOf(nominal_mm, grade);
  if (tolerance === undefined) return undefined;
  const isHole = letter === letter.toUpperCase();
  const lower = letter.toLowerCase() === "js" ? -tolerance / 2 : isHole ? holeLower(nominal_mm, letter, grade, tolerance) : shaftLower(nominal_mm, letter, grade, tolerance);
  if (lower === undefined) return undefined;
  // Micrometres are added as micrometres, so that 25 + 21 µm is 25.021 and not 25.020999….
  const at = (deviation: number) => Number((nominal_mm + deviation / 1000).toFixed(7));
  return { kind: isHole ? "hole" : "shaft", lower_mm: at(lower), upper_mm: at(lower + tolerance) };
}

function toleranceOf(nominal: number, grade: number): number | undefined {
  return internationalTolerance_um[`IT${grade}`]?.[column(sizeBounds_mm, nominal)];
}

/** Fundamental deviation of a shaft: es up to h, ei from k on. */
function shaftDeviation(nominal: number, letter: string): number | undefined {
  if (letter === "r" || letter === "s") return (letter === "r" ? shaftR_um : shaftS_um)[column(subBounds_mm, nominal)];
  return shaftDeviation_um[letter]?.[column(sizeBounds_mm, nominal)];
}

function shaftLower(nominal: number, letter: string, grade: number, tolerance: number): number | undefined {
  const deviation = shaftDeviation(nominal, letter);
  if (deviation === undefined) return undefined;
  if (letter <= "h") return deviation - tolerance;
  return letter === "k" && (grade < 4 || grade > 7) ? 0 : deviation;
}

// ISO 286-1, 4.3.2.5: holes mirror shafts, with delta for K to N up to IT8 and P and above up to IT7.
function holeLower(nominal: number, capital: string, grade: number, tolerance: number): number | undefined {
  const letter = capital.toLowerCase();
  const shaft = shaftDeviation(nominal, letter);
  if (shaft === undefined) return undefined;
  if (letter <= "h") return shaft === 0 ? 0 : -shaft;
  const middle = letter === "k" || letter === "m" || letter === "n";
  const upTo = middle ? 8 : 7;
  if (grade > upTo) {
    if (letter === "k") return nominal <= 3 ? -tolerance : undefined;
    if (letter === "n") return (nominal <= 3 ? -4 : 0) - tolerance;
    if (letter === "m") return undefined;
    return -shaft - tolerance;
  }
  if (letter === "m" && grade === 6 && nominal > 250 && nominal <= 315) return -9 - tolerance;
  const before = grade > 3 ? toleranceOf(nominal, grade - 1) : undefined;
  const delta = nominal <= 3 || before === undefined ? 0 : tolerance - before;
  return -shaft + delta - tolerance;
}
