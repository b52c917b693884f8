export type KeypadKey = "0" | "1" | "2" | "3" | "4" | "5" | "6" | "7" | "8" | "9" | "." | "delete";

/** Longer than any reading of a shop's instruments; keeps a stuck key from filling the screen. */
const LONGEST = 10;

/**
 * What stands in the reading after a key: one point at most, no needless leading zero,
 * a point first becomes "0.".
 */
export function pressKey(entry: string, key: KeypadKey): string {
  if (key === "delete") return entry === "0." ? "" : entry.slice(0, -1);
  if (entry.length >= LONGEST) return entry;
  if (key === ".") return entry.includes(".") ? entry : `${entry || "0"}.`;
  return entry === "0" ? key : entry + key;
}
