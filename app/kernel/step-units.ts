/** ISO 10303-41 prefixes of SI units, as powers of ten. */
const PREFIX: Record<string, number> = {
  EXA: 18, PETA: 15, TERA: 12, GIGA: 9, MEGA: 6, KILO: 3, HECTO: 2, DECA: 1, DECI: -1, CENTI: -2, MILLI: -3, MICRO: -6, NANO: -9, PICO: -12, FEMTO: -15, ATTO: -18,
};
const NAMES: [mm: number, name: string][] = [[1, "mm"], [25.4, "in"], [1000, "m"], [10, "cm"], [304.8, "ft"], [914.4, "yd"], [0.001, "µm"], [0.0254, "mil"], [100, "dm"], [1e6, "km"]];
/** Files write 0.0254 with a few digits less or more; no two units lie closer. */
const SAME = 1e-6;
const NUMBER = String.raw`[-+]?\d+\.?\d*(?:E[-+]?\d+)?`;

/**
 * Which units of length do the file's contexts use, in millimetres, most used first?
 *
 * A unit that converts is followed by its factor, never by its name: files call a millimetre METRE.
 *
 * @param entities text of the statements about lengths, by entity number, without comments and texts
 */
export function lengthUnitsOf(entities: ReadonlyMap<number, string>): number[] {
  const uses = new Map<number, number>();
  for (const body of entities.values()) {
    const context = /GLOBAL_UNIT_ASSIGNED_CONTEXT\s*\(\s*\(([^)]*)\)/.exec(body);
    if (!context) continue;
    for (const [, id] of context[1]!.matchAll(/#(\d+)/g)) {
      const mm = millimetres(Number(id), entities, 0);
      if (mm === null) continue;
      const known = [...uses.keys()].find((other) => Math.abs(other / mm - 1) < SAME) ?? mm;
      uses.set(known, (uses.get(known) ?? 0) + 1);
    }
  }
  return [...uses].sort((a, b) => b[1] - a[1]).map(([mm]) => mm);
}

/** What a person calls a unit of so many millimetres. */
export function factorName(mm: number): string {
  return NAMES.find(([known]) => Math.abs(mm / known - 1) < SAME)?.[1] ?? `${Number(mm.toPrecision(9))} mm`;
}

/** Millimetres in the unit `id`, or null when it is no unit of length that can be followed to its end. */
function millimetres(id: number, entities: ReadonlyMap<number, string>, depth: number): number | null {
  const body = entities.get(id);
  // Units that refer to each other in a circle have no length.
  if (body === undefined || depth > 8) return null;
  const si = /\bSI_UNIT\s*\(\s*(\$|\.(\w+)\.)\s*,\s*\.METRE\.\s*\)/.exec(body);
  if (si) {
    const power = si[2] === undefined ? 0 : PREFIX[si[2]];
    return power === undefined ? null : Number(`1e${power + 3}`);
  }
  const converted = /CONVERSION_BASED_UNIT\s*\(\s*(?:''|\$)\s*,\s*#(\d+)\s*\)/.exec(body);
  if (converted && /\bLENGTH_UNIT\b/.test(body)) return measure(Number(converted[1]), entities, depth + 1);
  return null;
}

function measure(id: number, entities: ReadonlyMap<number, string>, depth: number): number | null {
  const body = entities.get(id) ?? "";
  const found = new RegExp(String.raw`MEASURE_WITH_UNIT\s*\(\s*(?:\w*MEASURE\s*\(\s*)?(${NUMBER})\s*\)?\s*,\s*#(\d+)`).exec(body);
  if (!found) return null;
  const unit = millimetres(Number(found[2]), entities, depth);
  const mm = unit === null ? null : Number(found[1]) * unit;
  return mm !== null && mm > 0 && Number.isFinite(mm) ? mm : null;
}
