/** What is stored of a model's measures, as far as its sheet tells it. */
export interface MeasuredModel {
  bounds_mm: { size: readonly [number, number, number] } | null;
  area_mm2: number | null;
  volume_mm3: number | null;
  mesh: { closed: boolean } | null;
  solid: { solids: number; valid: boolean } | null;
  thinnestWall_mm: number | null;
  smallestInsideRadius_mm: number | null;
}

export interface ModelFacts {
  /** null without a stock, or where the volume is none. */
  massKg: number | null;
  volumeMm3: number | null;
  areaMm2: number | null;
  sizeMm: readonly [number, number, number] | null;
  thinnestWallMm: number | null;
  smallestInsideRadiusMm: number | null;
}

/** Does the model enclose a volume? Of an open surface a volume can be summed up, and means nothing. */
export function isClosed({ solid, mesh }: Pick<MeasuredModel, "solid" | "mesh">): boolean {
  return solid ? solid.solids > 0 && solid.valid : (mesh?.closed ?? false);
}

/**
 * What does the part measure and weigh?
 *
 * @param densityKgM3 of the part's stock; null while none is chosen
 */
export function modelFacts(model: MeasuredModel, densityKgM3: number | null): ModelFacts {
  const volumeMm3 = isClosed(model) && model.volume_mm3 !== null && model.volume_mm3 > 0 ? model.volume_mm3 : null;
  return {
    massKg: volumeMm3 === null || densityKgM3 === null ? null : volumeMm3 * 1e-9 * densityKgM3,
    volumeMm3,
    areaMm2: model.area_mm2,
    sizeMm: model.bounds_mm?.size ?? null,
    thinnestWallMm: model.thinnestWall_mm,
    smallestInsideRadiusMm: model.smallestInsideRadius_mm,
  };
}

/** "1 to 4, 6" of 0, 1, 2, 3, 5: places in a list as a person counts them. */
export function countedPlaces(indices: readonly number[]): string {
  const places = [...indices].map((index) => index + 1).sort((a, b) => a - b);
  const runs: [from: number, to: number][] = [];
  for (const place of places) {
    const run = runs.at(-1);
    if (run && place === run[1] + 1) run[1] = place;
    else runs.push([place, place]);
  }
  return runs.map(([from, to]) => (from === to ? `${from}` : to === from + 1 ? `${from}, ${to}` : `${from} to ${to}`)).join(", ");
}
