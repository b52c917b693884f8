export function parseLength(text: string, units: "mm" | "in"): { ok: true; mm: number } | { ok: false; reason: string } {
  const value = Number(text);
  return Number.isFinite(value) ? { ok: true, mm: units === "in" ? value * 25.4 : value } : { ok: false, reason: "This is not a length" };
}
