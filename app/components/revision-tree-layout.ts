/** A placed revision, as `layOutRevisionTree` places it, with its words. */
export interface TreeNodeView {
  id: string;
  href: string;
  /** "4", or "A" beside it once released. */
  label: string;
  branchName?: string | null;
  status: string | null;
  changeText: string;
  lane: number;
  column: number;
  current?: boolean;
  setAside?: boolean;
}

export interface TreeEdgeView {
  from: { id: string };
  to: { id: string };
}

export interface DrawnNode extends TreeNodeView {
  x: number;
  y: number;
  width: number;
  /** Only number and status are shown. */
  narrow: boolean;
}

export interface DrawnTree {
  width: number;
  height: number;
  nodes: DrawnNode[];
  paths: { d: string; setAside: boolean }[];
}

const LEFT = 28;
const TOP = 28;
export const LANE = 88;
const COLUMN = 228;
const NARROW = 128;
/** Between a revision's words and the next column: where branches drop. */
const BRANCH_ROOM = 50;
/** Up to here every revision has its words in sight. */
const FOLDS_ABOVE = 6;

/**
 * Turns columns and lanes into positions. In a long tree the revisions between are folded to
 * their number: the current one, its neighbours, branches, the first and the last two keep their words.
 */
export function drawTree(nodes: readonly TreeNodeView[], edges: readonly TreeEdgeView[], folded: boolean): DrawnTree {
  const columns = Math.max(0, ...nodes.map((node) => node.column + 1));
  const current = nodes.find((node) => node.current);
  const keepsWords = (node: TreeNodeView) =>
    node.lane > 0 || node.column === 0 || node.column >= columns - 2 || (current !== undefined && Math.abs(node.column - current.column) <= 1);
  const narrow = new Set(folded && columns > FOLDS_ABOVE ? nodes.filter((node) => !keepsWords(node)).map((node) => node.column) : []);
  const starts = [LEFT];
  for (let column = 0; column < columns; column++) starts.push(starts[column]! + (narrow.has(column) ? NARROW : COLUMN));

  const drawn = nodes.map((node) => ({
    ...node,
    x: starts[node.column]!,
    y: TOP + node.lane * LANE,
    width: starts[node.column + 1]! - starts[node.column]! - BRANCH_ROOM,
    narrow: narrow.has(node.column),
  }));
  const byId = new Map(drawn.map((node) => [node.id, node]));
  const paths = edges.flatMap(({ from, to }) => {
    const a = byId.get(from.id);
    const b = byId.get(to.id);
    return a && b ? [{ d: edgePath(a, b), setAside: Boolean(b.setAside) }] : [];
  });
  const lanes = Math.max(1, ...nodes.map((node) => node.lane + 1));
  return { width: starts[columns]!, height: TOP + lanes * LANE - 8, nodes: drawn, paths };
}

/** Straight along a lane; a branch leaves the line behind its parent's words, before the next column. */
function edgePath(a: DrawnNode, b: DrawnNode): string {
  if (a.y === b.y) return `M${a.x} ${a.y}H${b.x}`;
  const from = a.x + a.width;
  const to = from + BRANCH_ROOM - 16;
  const middle = (from + to) / 2;
  return `M${a.x} ${a.y}H${from}C${middle} ${a.y} ${middle} ${b.y} ${to} ${b.y}H${b.x}`;
}

export function isFoldable(nodes: readonly TreeNodeView[]): boolean {
  return nodes.length > FOLDS_ABOVE;
}
