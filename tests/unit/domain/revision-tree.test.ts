import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { layOutRevisionTree, type RevisionTree, type TreeRevision } from "#app/domain/revision-tree.ts";

/** "2<1" is revision 2 made from 1; "-" behind it: set aside. */
function tree(text: string): TreeRevision[] {
  return text.split(" ").map((word) => {
    const [, ordinal, parent, aside] = /^(\d+)(?:<(\d+))?(-?)$/.exec(word)!;
    return { id: `r${ordinal}`, ordinal: Number(ordinal), parentId: parent === undefined ? null : `r${parent}`, setAside: aside === "-" };
  });
}

const lanesOf = ({ nodes }: RevisionTree) => nodes.map((node) => node.lane);

/** Any tree: each revision has an earlier parent, or now and then none. */
const anyTree = (maxLength: number) =>
  fc
    .array(fc.record({ parent: fc.nat(), first: fc.integer({ min: 0, max: 19 }), setAside: fc.boolean(), gap: fc.integer({ min: 1, max: 3 }) }), { minLength: 1, maxLength })
    .map((list) => {
      let ordinal = 0;
      return list.map(({ parent, first, setAside, gap }, index): TreeRevision => {
        ordinal += gap;
        return { id: `r${index}`, ordinal, parentId: index === 0 || first === 0 ? null : `r${parent % index}`, setAside };
      });
    });

function checkLayout(revisions: TreeRevision[], layout: RevisionTree): void {
  expect(layout.nodes.length).toBe(revisions.length);
  const at = new Map(layout.nodes.map((node) => [node.id, node]));
  expect(new Set(layout.nodes.map(({ column, lane }) => `${column}/${lane}`)).size).toBe(revisions.length);
  for (const { id, parentId } of revisions) {
    if (parentId === null) continue;
    expect(at.get(id)!.column).toBeGreaterThan(at.get(parentId)!.column);
    expect(at.get(id)!.lane).toBeGreaterThanOrEqual(at.get(parentId)!.lane);
  }
  expect(layout.edges.length).toBe(revisions.filter((one) => one.parentId !== null).length);
  for (const { from, to } of layout.edges) {
    expect(revisions.find((one) => one.id === to.id)!.parentId).toBe(from.id);
    // The line runs down from the parent and then along the child's lane: no third revision stands on it.
    const onLine = layout.nodes.filter(
      (node) => node !== from && node !== to && ((node.lane === to.lane && node.column > from.column && node.column < to.column) || (node.column === from.column && node.lane > from.lane && node.lane <= to.lane)),
    );
    expect(onLine).toEqual([]);
  }
  expect(layout.columns).toBe(revisions.length);
  expect(layout.lanes).toBe(Math.max(...layout.nodes.map((node) => node.lane)) + 1);
}

test("no two revisions on one place, children right of and not above their parent, no line through a third", () => {
  fc.assert(fc.property(anyTree(60), (revisions) => checkLayout(revisions, layOutRevisionTree(revisions))), { numRuns: 300 });
});

test("hundreds of revisions", () => {
  fc.assert(
    fc.property(fc.integer({ min: 200, max: 600 }), fc.integer(), (count, seed) => {
      const [revisions] = fc.sample(fc.array(fc.nat(), { minLength: count, maxLength: count }), { seed, numRuns: 1 });
      const list = revisions!.map((parent, index): TreeRevision => ({ id: `r${index}`, ordinal: index + 1, parentId: index === 0 ? null : `r${parent % index}`, setAside: false }));
      const started = performance.now();
      const layout = layOutRevisionTree(list);
      expect(performance.now() - started).toBeLessThan(500);
      checkLayout(list, layout);
    }),
    { numRuns: 4 },
  );
});

test("the order they come in does not matter", () => {
  fc.assert(
    fc.property(anyTree(30), fc.infiniteStream(fc.boolean()), (revisions, coins) => {
      const shuffled = [...revisions].sort(() => (coins.next().value ? 1 : -1));
      expect(layOutRevisionTree(shuffled)).toEqual(layOutRevisionTree(revisions));
    }),
  );
});

test("the way to the tip is all on the top lane, and nothing else that branches is", () => {
  fc.assert(
    fc.property(anyTree(40), fc.nat(), (revisions, pick) => {
      const tip = revisions[pick % revisions.length]!.id;
      const layout = layOutRevisionTree(revisions, tip);
      checkLayout(revisions, layout);
      const byId = new Map(revisions.map((one) => [one.id, one]));
      for (let at: string | null = tip; at !== null; at = byId.get(at)!.parentId) expect(layout.nodes.find((node) => node.id === at)!.lane).toBe(0);
      // One line only: at most one child of each stands beside it on the top lane.
      for (const { id } of revisions) {
        const heirs = layout.edges.filter((edge) => edge.from.id === id && edge.from.lane === 0 && edge.to.lane === 0);
        expect(heirs.length).toBeLessThanOrEqual(1);
      }
      expect(layout.nodes.filter((node) => node.lane === 0 && byId.get(node.id)!.parentId === null).length).toBe(1);
    }),
  );
});

describe("pictures", () => {
  test.each([
    ["a straight line", "1 2<1 3<2", null, [0, 0, 0]],
    ["one branch, set aside", "1 2<1 3<2- 4<2", null, [0, 0, 1, 0]],
    ["a newer branch leads", "1 2<1 3<1", null, [0, 1, 0]],
    ["unless another is the tip", "1 2<1 3<1", "r2", [0, 0, 1]],
    ["two branches of one parent", "1 2<1- 3<1- 4<1", null, [0, 2, 1, 0]],
    ["branches that do not overlap share a lane", "1 2<1- 3<1 4<3- 5<3", null, [0, 1, 0, 1, 0]],
    ["branches that overlap do not", "1 2<1- 3<1 4<3- 5<2- 6<3", null, [0, 2, 0, 1, 2, 0]],
    ["a branch of a branch", "1 2<1- 3<2- 4<2- 5<1", null, [0, 1, 2, 1, 0]],
    ["two first revisions", "1 2 3<1", null, [0, 1, 0]],
    ["all set aside", "1- 2<1-", null, [0, 0]],
  ])("%s", (_, text, tip, lanes) => {
    expect(lanesOf(layOutRevisionTree(tree(text), tip))).toEqual(lanes);
  });
  test("none", () => {
    expect(layOutRevisionTree([])).toEqual({ nodes: [], edges: [], columns: 0, lanes: 0 });
  });
});

test.each([
  ["a missing parent", tree("1 2<7")],
  ["a parent younger than its child", tree("1<2 2")],
  ["its own parent", tree("1<1")],
  ["the same number twice", [...tree("1"), { id: "other", ordinal: 1, parentId: null, setAside: false }]],
  ["the same id twice", [...tree("1"), { id: "r1", ordinal: 2, parentId: null, setAside: false }]],
])("%s is refused", (_, revisions) => {
  expect(() => layOutRevisionTree(revisions)).toThrow(RangeError);
});

test("a tip that is not in the tree is refused", () => {
  expect(() => layOutRevisionTree(tree("1"), "r9")).toThrow(RangeError);
});
