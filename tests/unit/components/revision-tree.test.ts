import { createElement as h } from "react";
import fc from "fast-check";
import { expect, test } from "vitest";
import { drawTree, type TreeNodeView } from "#app/components/revision-tree-layout.ts";
import { RevisionTree } from "#app/components/revision-tree.tsx";
import { layOutRevisionTree } from "#app/domain/revision-tree.ts";
import { serverMarkup, wordsOf } from "./render.ts";

/** Parents by index; every revision but the first has one that is older. */
function treeOf(parents: (number | null)[], current = parents.length - 1) {
  const tree = layOutRevisionTree(parents.map((parent, index) => ({ id: `r${index}`, ordinal: index + 1, parentId: parent === null ? null : `r${parent}`, setAside: false })));
  const nodes: TreeNodeView[] = tree.nodes.map((node, index) => ({ ...node, href: `/revisions/${node.id}`, label: String(index + 1), status: "tried", changeText: `change ${index + 1}`, current: index === current }));
  return { nodes, edges: tree.edges };
}

const parents = fc.array(fc.nat(), { maxLength: 30 }).map((choices) => [null, ...choices.map((choice, index) => choice % (index + 1))]);

test("words of two revisions never lie on each other, and no line runs through them, folded or not", () => {
  fc.assert(
    fc.property(parents, fc.boolean(), (given, folded) => {
      const { nodes, edges } = treeOf(given);
      const drawn = drawTree(nodes, edges, folded);
      for (const node of drawn.nodes) {
        expect(node.x + node.width).toBeLessThanOrEqual(drawn.width);
        expect(node.y + 20).toBeLessThan(drawn.height);
        for (const other of drawn.nodes) {
          if (other !== node && other.y === node.y) expect(other.x >= node.x + node.width || other.x + other.width <= node.x).toBe(true);
        }
      }
      for (const { d } of drawn.paths) {
        const drop = /H([\d.]+)C.* ([\d.]+) [\d.]+H/.exec(d);
        if (!drop) continue;
        // Columns are shared by all lanes, so a drop that is clear of one column's words is clear in every lane.
        const from = Number(drop[1]);
        const to = Number(drop[2]);
        for (const node of drawn.nodes) expect(to <= node.x || from >= node.x + node.width).toBe(true);
      }
    }),
  );
});

test("a long tree folds to numbers; the current one, its neighbours, branches and both ends keep their words", () => {
  const { nodes, edges } = treeOf([null, 0, 1, 2, 3, 4, 5, 6, 7, 8], 4);
  const narrow = (folded: boolean) => drawTree(nodes, edges, folded).nodes.filter((node) => node.narrow).map((node) => node.label);
  expect(narrow(true)).toEqual(["2", "3", "7", "8"]);
  expect(narrow(false)).toEqual([]);
  expect(drawTree(...(Object.values(treeOf([null, 0, 1])) as [TreeNodeView[], []]), true).nodes.some((node) => node.narrow)).toBe(false);
});

test("every revision is a link in reading order, the current one marked", async () => {
  const markup = await serverMarkup(h(RevisionTree, { ...treeOf([null, 0, 0, 1]), add: { href: "/new", label: "Add revision 5" } }));
  expect([...markup.matchAll(/href="([^"]+)"/g)].map((match) => match[1])).toEqual(["/revisions/r0", "/revisions/r1", "/revisions/r2", "/revisions/r3", "/new"]);
  expect([...markup.matchAll(/aria-current="page"/g)]).toHaveLength(1);
  expect(wordsOf(markup)).toContain("4 tried change 4");
  expect(wordsOf(await serverMarkup(h(RevisionTree, { nodes: [], edges: [] })))).toBe("");
});
