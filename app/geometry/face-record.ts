import type { Vec3 } from "./measure-document.ts";

/** One stretch of a face's boundary. */
export interface FaceSide {
  /** The same number on the two faces that meet here. */
  edge: number;
  /** Along the edge in mm, so that the face lies on the left of who walks there with its outward normal for up. */
  points: Vec3[];
  /** The face's outward normal in the middle of the edge, unit length. */
  normal: Vec3;
}

/** What feature recognition needs to know of a face of a solid, in plain numbers; lengths in mm. */
export interface FaceRecord {
  /** Which solid it bounds. */
  solid: number;
  kind: "plane" | "cylinder" | "cone" | "torus" | "sphere" | "other";
  /** A point of a plane or of the axis; the centre of a torus or sphere. */
  origin: Vec3;
  /** Outward normal of a plane, else the direction of the axis; unit length, zero where there is none. */
  direction: Vec3;
  /** Of a cylinder or sphere, of the tube of a torus; 0 for the others. */
  radius_mm: number;
  /** Does it curve around empty space (a bore) rather than around material (a shaft)? */
  concave: boolean;
  sides: FaceSide[];
}
