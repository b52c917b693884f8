export interface PlacedLabel {
  /** Where the leader line ends and the words begin. */
  x: number;
  y: number;
  side: "left" | "right";
}

/** Between the part's outline and the words, sideways. */
const CLEAR = 28;
/** Height that the words of one callout take. */
const ROW = 46;
const MARGIN = 14;
/** Room the words want beside the leader's end. */
const WORDS = 170;

export interface LabelView {
  width: number;
  height: number;
  /** Between which the part itself lies, px from the left. */
  part: { left: number; right: number };
}

/**
 * Puts the words of callouts beside their spots, to the outside of the view, none over another.
 *
 * @param spots where they are on the screen, px
 * @returns as many, in the same order; null for a spot that is out of the view
 */
export function placeLabels(spots: readonly { x: number; y: number }[], view: LabelView): (PlacedLabel | null)[] {
  const placed: (PlacedLabel | null)[] = spots.map(({ x, y }) => {
    if (!(x >= 0 && x <= view.width && y >= 0 && y <= view.height)) return null;
    const side = x < (view.part.left + view.part.right) / 2 ? "left" : "right";
    const reach = side === "left" ? Math.max(Math.min(x, view.part.left) - CLEAR, WORDS) : Math.min(Math.max(x, view.part.right) + CLEAR, view.width - WORDS);
    return { x: reach, y: Math.min(Math.max(y + ROW, ROW), view.height - ROW), side };
  });
  for (const side of ["left", "right"] as const) {
    const column = placed.filter((label) => label?.side === side).sort((a, b) => a!.y - b!.y) as PlacedLabel[];
    spread(column, view.height);
  }
  return placed;
}

/** Pushes down what lies on what is above it, then up again what has left the view. */
function spread(column: PlacedLabel[], height: number): void {
  for (let i = 1; i < column.length; i++) column[i]!.y = Math.max(column[i]!.y, column[i - 1]!.y + ROW);
  let floor = height - MARGIN;
  for (let i = column.length - 1; i >= 0; i--) {
    column[i]!.y = Math.min(column[i]!.y, floor);
    floor = column[i]!.y - ROW;
  }
}
