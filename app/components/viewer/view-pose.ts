/** From where a part is looked at: degrees around z from +x, and above the horizontal. */
export interface ViewPose {
  azimuth_deg: number;
  elevation_deg: number;
}

/**
 * The six views of a drawing and the isometric one, z upwards; "front" looks along +y.
 * Views and their words: ISO 128-3; isometric axes: ISO 5456-3 (both from memory).
 */
export const standardViews = {
  isometric: { azimuth_deg: -45, elevation_deg: (Math.atan(Math.SQRT1_2) * 180) / Math.PI },
  front: { azimuth_deg: -90, elevation_deg: 0 },
  left: { azimuth_deg: 180, elevation_deg: 0 },
  top: { azimuth_deg: -90, elevation_deg: 90 },
  right: { azimuth_deg: 0, elevation_deg: 0 },
  bottom: { azimuth_deg: -90, elevation_deg: -90 },
  back: { azimuth_deg: 90, elevation_deg: 0 },
} as const satisfies Record<string, ViewPose>;

export type StandardView = keyof typeof standardViews;

export type Point = readonly [number, number, number];

/** Straight from above there is no azimuth left to see; this little less keeps it. */
const STEEPEST_DEG = 89.999;

const radians = (degrees: number) => (degrees * Math.PI) / 180;

/** Unit vector from what is looked at to the eye. */
export function towardsEye({ azimuth_deg, elevation_deg }: ViewPose): [number, number, number] {
  const azimuth = radians(azimuth_deg);
  const elevation = radians(steep(elevation_deg));
  return [Math.cos(elevation) * Math.cos(azimuth), Math.cos(elevation) * Math.sin(azimuth), Math.sin(elevation)];
}

/** The pose that an eye in this direction has; the direction need not have unit length. */
export function poseOf([x, y, z]: Point): ViewPose {
  return { azimuth_deg: (Math.atan2(y, x) * 180) / Math.PI, elevation_deg: steep((Math.atan2(z, Math.hypot(x, y)) * 180) / Math.PI) };
}

function steep(elevation_deg: number): number {
  return Math.min(STEEPEST_DEG, Math.max(-STEEPEST_DEG, elevation_deg));
}

/** Where right and up point on the screen, unit length, in the part's own axes. */
export function screenAxes(pose: ViewPose): { right: [number, number, number]; up: [number, number, number] } {
  const azimuth = radians(pose.azimuth_deg);
  const elevation = radians(steep(pose.elevation_deg));
  return {
    right: [-Math.sin(azimuth), Math.cos(azimuth), 0],
    up: [-Math.sin(elevation) * Math.cos(azimuth), -Math.sin(elevation) * Math.sin(azimuth), Math.cos(elevation)],
  };
}

/**
 * How many pixels a millimetre may have for a box to fill a view with a margin around it.
 *
 * @param size_mm extents of the box; a flat or single-point box is looked at as if it were 1 mm
 * @param margin share of the view that stays free
 */
export function zoomToFit(size_mm: Point, pose: ViewPose, view: { width: number; height: number }, margin = 0.2): number {
  const { right, up } = screenAxes(pose);
  const across = (axis: Point) => Math.abs(axis[0]) * size_mm[0] + Math.abs(axis[1]) * size_mm[1] + Math.abs(axis[2]) * size_mm[2];
  const wide = Math.max(across(right), 1);
  const high = Math.max(across(up), 1);
  return Math.max(0.001, Math.min(view.width / wide, view.height / high) * (1 - margin));
}

/** The pose a share of the way from one to the other, the short way around. */
export function poseBetween(from: ViewPose, to: ViewPose, share: number): ViewPose {
  const around = ((((to.azimuth_deg - from.azimuth_deg) % 360) + 540) % 360) - 180;
  return { azimuth_deg: from.azimuth_deg + around * share, elevation_deg: from.elevation_deg + (to.elevation_deg - from.elevation_deg) * share };
}
