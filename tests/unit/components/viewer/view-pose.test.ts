import fc from "fast-check";
import { expect, test } from "vitest";
import { poseBetween, poseOf, screenAxes, standardViews, towardsEye, zoomToFit, type Point } from "#app/components/viewer/view-pose.ts";

const dot = (a: Point, b: Point) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
const cross = (a: Point, b: Point): Point => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
const pose = fc.record({ azimuth_deg: fc.double({ min: -720, max: 720, noNaN: true }), elevation_deg: fc.double({ min: -90, max: 90, noNaN: true }) });

test("right, up and the way to the eye stand square on each other, right-handed, from wherever one looks", () => {
  fc.assert(
    fc.property(pose, (from) => {
      const { right, up } = screenAxes(from);
      const eye = towardsEye(from);
      for (const [a, b] of [[right, up], [up, eye], [eye, right]] as const) expect(dot(a, b)).toBeCloseTo(0, 9);
      for (const axis of [right, up, eye]) expect(Math.hypot(...axis)).toBeCloseTo(1, 9);
      cross(right, up).forEach((part, k) => expect(part).toBeCloseTo(eye[k]!, 9));
    }),
  );
});

test("a pose comes back from the direction it gives", () => {
  fc.assert(
    fc.property(fc.record({ azimuth_deg: fc.double({ min: -179, max: 179, noNaN: true }), elevation_deg: fc.double({ min: -89, max: 89, noNaN: true }) }), (from) => {
      const back = poseOf(towardsEye(from));
      expect(back.azimuth_deg).toBeCloseTo(from.azimuth_deg, 6);
      expect(back.elevation_deg).toBeCloseTo(from.elevation_deg, 6);
    }),
  );
});

// What stands where in a view: the definitions of the views in ISO 128-3, from memory; z is upwards.
test.each([
  { view: "front", right: [1, 0, 0], up: [0, 0, 1] },
  { view: "back", right: [-1, 0, 0], up: [0, 0, 1] },
  { view: "left", right: [0, -1, 0], up: [0, 0, 1] },
  { view: "right", right: [0, 1, 0], up: [0, 0, 1] },
  { view: "top", right: [1, 0, 0], up: [0, 1, 0] },
  { view: "bottom", right: [1, 0, 0], up: [0, -1, 0] },
] as const)("seen from the $view", ({ view, right, up }) => {
  const axes = screenAxes(standardViews[view]);
  right.forEach((part, k) => expect(axes.right[k]).toBeCloseTo(part, 4));
  up.forEach((part, k) => expect(axes.up[k]).toBeCloseTo(part, 4));
});

test("in the isometric view the three axes look equally long: √(2/3), ISO 5456-3 from memory", () => {
  const { right, up } = screenAxes(standardViews.isometric);
  for (const k of [0, 1, 2]) expect(Math.hypot(right[k]!, up[k]!)).toBeCloseTo(Math.sqrt(2 / 3), 9);
});

test("fitted, no corner of a box leaves the view", () => {
  const extent = fc.double({ min: 1e-3, max: 1e4, noNaN: true });
  fc.assert(
    fc.property(pose, fc.tuple(extent, extent, extent), (from, size) => {
      const view = { width: 800, height: 500 };
      const zoom = zoomToFit(size, from, view);
      const { right, up } = screenAxes(from);
      for (const [x, y, z] of [[1, 1, 1], [1, 1, -1], [1, -1, 1], [1, -1, -1]] as const) {
        const corner: Point = [(x * size[0]) / 2, (y * size[1]) / 2, (z * size[2]) / 2];
        expect(Math.abs(dot(corner, right)) * zoom).toBeLessThanOrEqual(view.width / 2);
        expect(Math.abs(dot(corner, up)) * zoom).toBeLessThanOrEqual(view.height / 2);
      }
    }),
  );
});

test("between two poses the short way around is taken", () => {
  const from = { azimuth_deg: 170, elevation_deg: 0 };
  const to = { azimuth_deg: -170, elevation_deg: 30 };
  expect(poseBetween(from, to, 0)).toEqual(from);
  expect(poseBetween(from, to, 0.5)).toEqual({ azimuth_deg: 180, elevation_deg: 15 });
  const end = poseBetween(from, to, 1);
  towardsEye(end).forEach((part, k) => expect(part).toBeCloseTo(towardsEye(to)[k]!, 9));
});
