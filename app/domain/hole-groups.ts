/** A recognised hole as far as an instruction cares; lengths in mm. */
export interface GroupableHole {
  kind: "through" | "blind";
  diameter_mm: number;
  depth_mm: number;
  entry: "plain" | "countersunk" | "counterbored" | "chamfered";
  entryDiameter_mm: number | null;
  entryAngle_deg: number | null;
}

export interface HoleGroup {
  /** "6 × Ø 6.60 through, countersunk Ø 12.00 90°" */
  label: string;
  /** Indices into the holes given. */
  holes: number[];
  /** Full-diameter depth; of a through hole the length of its bore. */
  depth_mm: number;
  diameter_mm: number;
}

/** Holes that differ by less are drilled alike; a hundredth of a millimetre, shop practice, no source. */
const sameMm = 0.01;

const key = (hole: GroupableHole) => {
  const step = (mm: number | null) => (mm === null ? "" : Math.round(mm / sameMm));
  return [hole.kind, step(hole.diameter_mm), step(hole.depth_mm), hole.entry, step(hole.entryDiameter_mm), Math.round(hole.entryAngle_deg ?? 0)].join("|");
};

/** Alike holes together, the most numerous first: a machinist reads six holes as one line. */
export function groupHoles(holes: readonly GroupableHole[]): HoleGroup[] {
  const groups = new Map<string, number[]>();
  holes.forEach((hole, index) => groups.set(key(hole), [...(groups.get(key(hole)) ?? []), index]));
  return [...groups.values()]
    .sort((a, b) => b.length - a.length || a[0]! - b[0]!)
    .map((indices) => {
      const hole = holes[indices[0]!]!;
      const depth = hole.kind === "through" ? "through" : `${hole.depth_mm.toFixed(2)} deep`;
      const count = indices.length > 1 ? `${indices.length} × ` : "";
      return { label: `${count}Ø ${hole.diameter_mm.toFixed(2)} ${depth}${entryWords(hole)}`, holes: indices, depth_mm: hole.depth_mm, diameter_mm: hole.diameter_mm };
    });
}

function entryWords({ entry, entryDiameter_mm, entryAngle_deg }: GroupableHole): string {
  if (entry === "plain") return "";
  const diameter = entryDiameter_mm === null ? "" : ` Ø ${entryDiameter_mm.toFixed(2)}`;
  const angle = entryAngle_deg === null || entry === "counterbored" ? "" : ` ${Math.round(entryAngle_deg)}°`;
  return `, ${entry}${diameter}${angle}`;
}
