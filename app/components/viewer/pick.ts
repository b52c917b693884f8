import { type BufferGeometry, type Camera, DoubleSide, type Plane, Ray, Raycaster, Vector2, Vector3 } from "three";
import { MeshBVH } from "three-mesh-bvh";
import type { FaceGroup, ViewModel } from "./load-model.ts";
import type { Point } from "./view-pose.ts";

export interface Pick {
  point_mm: [number, number, number];
  group: FaceGroup;
  /** Index into the group's faces. */
  face: number;
  /** The point is an end of an edge near by, not where the finger was. */
  snapped: boolean;
}

/** Built when it is first asked for; goes with its geometry. */
const trees = new WeakMap<BufferGeometry, MeshBVH>();

function treeOf(geometry: BufferGeometry): MeshBVH {
  // Indirect: the order of the triangles says which face they are of.
  const tree = trees.get(geometry) ?? new MeshBVH(geometry, { indirect: true });
  trees.set(geometry, tree);
  return tree;
}

interface Hit {
  distance: number;
  point: Vector3;
  group: FaceGroup;
  triangle: number;
}

function firstHit(model: ViewModel, ray: Ray, cut: Plane | null): Hit | null {
  let nearest: Hit | null = null;
  for (const group of model.groups) {
    for (const { distance, point, faceIndex } of treeOf(group.geometry).raycast(ray, DoubleSide)) {
      if (distance >= (nearest?.distance ?? Infinity) || (cut && cut.distanceToPoint(point) < 0)) continue;
      nearest = { distance, point: point.clone(), group, triangle: faceIndex ?? 0 };
    }
  }
  return nearest;
}

const SNAP_PX = 9;

/**
 * What lies under a spot of the view?
 *
 * @param spot px from the upper left
 * @returns null beside the part, and where it is cut away
 */
export function pickAt(model: ViewModel, camera: Camera, spot: { x: number; y: number }, view: { width: number; height: number }, cut: Plane | null): Pick | null {
  const caster = new Raycaster();
  caster.setFromCamera(new Vector2((spot.x / view.width) * 2 - 1, 1 - (spot.y / view.height) * 2), camera);
  const hit = firstHit(model, caster.ray, cut);
  if (!hit) return null;
  const first = hit.triangle * 3;
  const face = hit.group.faces.findIndex(([start, count]) => first >= start && first < start + count);
  const corner = cornerNear(model, camera, spot, view, hit.point, cut);
  return { point_mm: (corner ?? hit.point).toArray(), group: hit.group, face: Math.max(0, face), snapped: corner !== null };
}

/** The end of an edge within a finger's slip of the spot, and as near in depth. */
function cornerNear(model: ViewModel, camera: Camera, spot: { x: number; y: number }, view: { width: number; height: number }, around: Vector3, cut: Plane | null): Vector3 | null {
  const starts = model.edges?.getAttribute("instanceStart");
  const ends = model.edges?.getAttribute("instanceEnd");
  if (!starts || !ends) return null;
  const zoom = "zoom" in camera ? Number(camera.zoom) : 1;
  const near = (SNAP_PX * 1.5) / zoom;
  const point = new Vector3();
  let best: { point: Vector3; px: number } | null = null;
  for (const attribute of [starts, ends]) {
    for (let i = 0; i < attribute.count; i++) {
      point.set(attribute.getX(i), attribute.getY(i), attribute.getZ(i));
      if (Math.abs(point.x - around.x) > near || point.distanceTo(around) > near || (cut && cut.distanceToPoint(point) < 0)) continue;
      const at = toScreen(camera, view, point.toArray());
      const px = Math.hypot(at.x - spot.x, at.y - spot.y);
      if (px <= SNAP_PX && px < (best?.px ?? Infinity)) best = { point: point.clone(), px };
    }
  }
  return best?.point ?? null;
}

/** Where a point of the part is on the screen, px from the upper left of the view. */
export function toScreen(camera: Camera, view: { width: number; height: number }, point: Point): { x: number; y: number } {
  const { x, y } = new Vector3(...point).project(camera);
  return { x: ((x + 1) / 2) * view.width, y: ((1 - y) / 2) * view.height };
}

/** Does the part itself, as it is turned now, lie in front of a point on its surface? */
export function isHidden(model: ViewModel, camera: Camera, point: Point, cut: Plane | null): boolean {
  const towards = new Vector3(0, 0, 1).transformDirection(camera.matrixWorld);
  // A little off the surface, so that the point does not hide itself.
  const off = Math.max(model.error_mm * 4, model.box.getSize(new Vector3()).length() * 2e-3);
  const ray = new Ray(new Vector3(...point).addScaledVector(towards, off), towards);
  return firstHit(model, ray, cut) !== null;
}
