/** A revision as the tree sees it. */
export interface TreeRevision {
  id: string;
  /** 1, 2, 3 in the order they were made; unique in the part. */
  ordinal: number;
  /** null for a first one; a part can have several. */
  parentId: string | null;
  /** Set aside revisions don't lead the main line while there is another. */
  setAside: boolean;
}

export interface PlacedRevision {
  id: string;
  /** 0 is the oldest, left. */
  column: number;
  /** 0 is the main line along the top; branches lie below their parent. */
  lane: number;
}

export interface TreeEdge {
  from: PlacedRevision;
  to: PlacedRevision;
}

export interface RevisionTree {
  nodes: PlacedRevision[];
  edges: TreeEdge[];
  columns: number;
  lanes: number;
}

/**
 * Where does each revision of a part stand in the picture of its tree?
 *
 * A column a revision, in the order they were made, so a child is always right of its parent. The
 * main line is the way from a first revision to `tip`, or to the newest one that is not set aside,
 * and runs on along the newest children; it keeps lane 0. Every branch takes the highest lane below
 * its parent that is free from its parent's column to its own last one.
 *
 * @param tip the revision that matters most (the released one); null: the newest not set aside
 * @returns nodes by ascending column; nothing for no revisions
 * @throws RangeError when an id or ordinal stands twice, a parent is missing or younger than its child, or the tip is missing
 */
export function layOutRevisionTree(revisions: readonly TreeRevision[], tip: string | null = null): RevisionTree {
  const ordered = [...revisions].sort((a, b) => a.ordinal - b.ordinal);
  const columnOf = checkedColumns(ordered);
  const children = new Map<string | null, TreeRevision[]>();
  for (const revision of ordered) children.set(revision.parentId, [...(children.get(revision.parentId) ?? []), revision]);

  const leader = tip ?? (ordered.findLast((revision) => !revision.setAside) ?? ordered.at(-1))?.id ?? null;
  const onMainLine = wayTo(leader, ordered);
  // Which child carries its parent's line on: the one on the main line, else the newest not set aside.
  const heir = (siblings: readonly TreeRevision[]) =>
    siblings.find((one) => onMainLine.has(one.id)) ?? siblings.findLast((one) => !one.setAside) ?? siblings.at(-1);

  const laneOf = new Map<string, number>();
  const occupied: { from: number; to: number }[][] = [];
  // Parents before their branches; of equals the one that leaves furthest right, so that its line nests above those from the left.
  const lines = linesOf(children, heir).sort((a, b) => a.level - b.level || startOf(b.chain) - startOf(a.chain));
  const isMain = (chain: readonly TreeRevision[]) => onMainLine.has(chain[0]!.id);
  for (const { chain } of [...lines.filter((line) => isMain(line.chain)), ...lines.filter((line) => !isMain(line.chain))]) {
    const { parentId } = chain[0]!;
    // Another first revision starts below the main line, which keeps the top for itself.
    const parentLane = isMain(chain) ? -1 : parentId === null ? 0 : laneOf.get(parentId)!;
    const span = { from: startOf(chain), to: columnOf.get(chain.at(-1)!.id)! };
    let lane = parentLane + 1;
    while (occupied[lane]?.some((taken) => taken.from <= span.to && span.from <= taken.to)) lane++;
    (occupied[lane] ??= []).push(span);
    for (const revision of chain) laneOf.set(revision.id, lane);
  }

  const nodes = ordered.map(({ id }) => ({ id, column: columnOf.get(id)!, lane: laneOf.get(id)! }));
  const nodeOf = new Map(nodes.map((node) => [node.id, node]));
  const edges = ordered.flatMap(({ id, parentId }) => (parentId === null ? [] : [{ from: nodeOf.get(parentId)!, to: nodeOf.get(id)! }]));
  return { nodes, edges, columns: nodes.length, lanes: nodes.reduce((most, node) => Math.max(most, node.lane + 1), 0) };

  /** A branch's line leaves its parent's column, so it holds its lane from there on. */
  function startOf(chain: readonly TreeRevision[]): number {
    return columnOf.get(chain[0]!.parentId ?? chain[0]!.id)!;
  }
}

function checkedColumns(ordered: readonly TreeRevision[]): Map<string, number> {
  const columnOf = new Map<string, number>();
  for (const [column, { id, ordinal, parentId }] of ordered.entries()) {
    if (columnOf.has(id)) throw new RangeError(`revision ${id} stands twice`);
    if (column > 0 && ordered[column - 1]!.ordinal === ordinal) throw new RangeError(`two revisions have the number ${ordinal}`);
    // A parent that was made before its child has its column already; this rules out circles too.
    if (parentId !== null && !columnOf.has(parentId)) throw new RangeError(`the parent of revision ${ordinal} is missing, or younger than it`);
    columnOf.set(id, column);
  }
  return columnOf;
}

function wayTo(id: string | null, revisions: readonly TreeRevision[]): Set<string> {
  const byId = new Map(revisions.map((revision) => [revision.id, revision]));
  const way = new Set<string>();
  for (let at = id; at !== null; at = byId.get(at)!.parentId) {
    if (!byId.has(at)) throw new RangeError(`revision ${at} is not part of the tree`);
    way.add(at);
  }
  return way;
}

interface TreeLine {
  chain: TreeRevision[];
  /** How many branchings lie between it and a first revision. */
  level: number;
}

/** Cuts the tree into lines: each starts at a first revision or a branch, and runs along the heirs. */
function linesOf(children: ReadonlyMap<string | null, TreeRevision[]>, heir: (siblings: readonly TreeRevision[]) => TreeRevision | undefined): TreeLine[] {
  const starts = (children.get(null) ?? []).map((first) => ({ first, level: 0 }));
  const lines: TreeLine[] = [];
  for (let start = starts.pop(); start !== undefined; start = starts.pop()) {
    const { first, level } = start;
    const chain = [first];
    for (let next = children.get(first.id); next !== undefined; next = children.get(chain.at(-1)!.id)) {
      const following = heir(next)!;
      starts.push(...next.filter((one) => one !== following).map((one) => ({ first: one, level: level + 1 })));
      chain.push(following);
    }
    lines.push({ chain, level });
  }
  return lines;
}
