import fc from "fast-check";
import { expect, test } from "vitest";
import { placeLabels } from "#app/components/viewer/marker-layout.ts";

const view = { width: 1000, height: 700, part: { left: 300, right: 700 } };

test("words stand outside the part, on the side of their spot", () => {
  const [left, right] = placeLabels([{ x: 350, y: 300 }, { x: 650, y: 300 }], view);
  expect(left).toMatchObject({ side: "left" });
  expect(left!.x).toBeLessThan(view.part.left);
  expect(right).toMatchObject({ side: "right" });
  expect(right!.x).toBeGreaterThan(view.part.right);
});

test("a spot out of the view has no words", () => {
  expect(placeLabels([{ x: -1, y: 10 }, { x: 10, y: 701 }, { x: NaN, y: 1 }], view)).toEqual([null, null, null]);
});

test("no words lie on others, and all are in the view, as long as there is room", () => {
  const spot = fc.record({ x: fc.double({ min: 0, max: 1000, noNaN: true }), y: fc.double({ min: 0, max: 700, noNaN: true }) });
  fc.assert(
    fc.property(fc.array(spot, { maxLength: 13 }), (spots) => {
      const placed = placeLabels(spots, view).filter((label) => label !== null);
      expect(placed).toHaveLength(spots.length);
      for (const side of ["left", "right"]) {
        const heights = placed.filter((label) => label.side === side).map(({ y }) => y).sort((a, b) => a - b);
        heights.slice(1).forEach((y, i) => expect(y - heights[i]!).toBeGreaterThanOrEqual(45.999));
        for (const y of heights) expect(y).toBeLessThanOrEqual(view.height);
        if (heights.length > 0) expect(heights[0]).toBeGreaterThan(0);
      }
    }),
  );
});
