import type { Vec3 } from "#app/geometry/measure-document.ts";
import { hasZeroArea } from "#app/geometry/zero-area.ts";

/** Triangles summed on their own before they join the total, so that a million terms cost no digits. */
const BLOCK = 1024;

/** Sums over the triangles of a mesh, in powers of the vertices' unit. */
export interface MassProperties {
  area: number;
  /** Triangles whose area is exactly zero. */
  zeroAreaTriangles: number;
  /** Sum of the area vectors (normal times area): zero for a closed, oriented mesh. */
  areaVector: Vec3;
  /** The point the rest is taken about. */
  about: Vec3;
  /** Signed: positive when the triangles run counterclockwise seen from outside. */
  volume: number;
  /** First moments of the volume, relative to `about`. */
  first: Vec3;
  /** Second moments relative to `about`: xx, yy, zz, xy, yz, zx. */
  second: [number, number, number, number, number, number];
}

/**
 * What area do these triangles have, and what volume and moments the space they enclose?
 *
 * Each triangle spans a signed tetrahedron with the point `about`; the moments of a tetrahedron
 * are polynomials of its corners (Tonon, "Explicit exact formulas for the 3-D tetrahedron inertia
 * tensor in terms of its vertex coordinates", J. Math. Stat. 1, 2005; from memory). For a closed,
 * oriented mesh the result does not depend on `about`, but its digits do: a point amid the part
 * keeps them however far from the origin it lies.
 *
 * @param vertices three finite numbers each
 * @param indices three vertex numbers a triangle
 */
export function massPropertiesOf(vertices: Float32Array | Float64Array, indices: Uint32Array, about: Vec3): MassProperties {
  const [ox, oy, oz] = about;
  let area = 0, zeroAreaTriangles = 0, sumX = 0, sumY = 0, sumZ = 0;
  let volume = 0, mx = 0, my = 0, mz = 0, mxx = 0, myy = 0, mzz = 0, mxy = 0, myz = 0, mzx = 0;
  for (let from = 0; from < indices.length; from += BLOCK * 3) {
    const to = Math.min(indices.length, from + BLOCK * 3);
    let doubled = 0, nxs = 0, nys = 0, nzs = 0;
    let v = 0, x = 0, y = 0, z = 0, xx = 0, yy = 0, zz = 0, xy = 0, yz = 0, zx = 0;
    for (let at = from; at < to; at += 3) {
      const p = indices[at]! * 3, q = indices[at + 1]! * 3, r = indices[at + 2]! * 3;
      const px = vertices[p]!, py = vertices[p + 1]!, pz = vertices[p + 2]!;
      const qx = vertices[q]!, qy = vertices[q + 1]!, qz = vertices[q + 2]!;
      const rx = vertices[r]!, ry = vertices[r + 1]!, rz = vertices[r + 2]!;
      const ux = qx - px, uy = qy - py, uz = qz - pz;
      const vx = rx - px, vy = ry - py, vz = rz - pz;
      const nx = uy * vz - uz * vy, ny = uz * vx - ux * vz, nz = ux * vy - uy * vx;
      const squared = nx * nx + ny * ny + nz * nz;
      // A sine above 1e-12 is far above what rounding can feign; below, only exact arithmetic knows.
      const least = (ux * ux + uy * uy + uz * uz) * (vx * vx + vy * vy + vz * vz) * 1e-24;
      if (!(squared > least && squared > 1e-290) && hasZeroArea(vertices, p, q, r)) {
        zeroAreaTriangles++;
        continue;
      }
      doubled += Math.sqrt(squared);
      nxs += nx;
      nys += ny;
      nzs += nz;

      const ax = px - ox, ay = py - oy, az = pz - oz;
      const bx = qx - ox, by = qy - oy, bz = qz - oz;
      const cx = rx - ox, cy = ry - oy, cz = rz - oz;
      const d = ax * nx + ay * ny + az * nz;
      const sx = ax + bx + cx, sy = ay + by + cy, sz = az + bz + cz;
      v += d;
      x += d * sx;
      y += d * sy;
      z += d * sz;
      xx += d * (sx * sx + ax * ax + bx * bx + cx * cx);
      yy += d * (sy * sy + ay * ay + by * by + cy * cy);
      zz += d * (sz * sz + az * az + bz * bz + cz * cz);
      xy += d * (sx * sy + ax * ay + bx * by + cx * cy);
      yz += d * (sy * sz + ay * az + by * bz + cy * cz);
      zx += d * (sz * sx + az * ax + bz * bx + cz * cx);
    }
    area += doubled / 2;
    sumX += nxs; sumY += nys; sumZ += nzs;
    volume += v; mx += x; my += y; mz += z;
    mxx += xx; myy += yy; mzz += zz; mxy += xy; myz += yz; mzx += zx;
  }
  return {
    area,
    zeroAreaTriangles,
    areaVector: [sumX / 2, sumY / 2, sumZ / 2],
    about,
    volume: volume / 6,
    first: [mx / 24, my / 24, mz / 24],
    second: [mxx / 120, myy / 120, mzz / 120, mxy / 120, myz / 120, mzx / 120],
  };
}

/** The signed volume as taken about the origin of the file: another number where the mesh is not closed and oriented. */
export function volumeAboutOrigin({ volume, areaVector, about }: MassProperties): number {
  return volume + (about[0] * areaVector[0] + about[1] * areaVector[1] + about[2] * areaVector[2]) / 3;
}

/**
 * Where is the centre of mass, and what is the inertia tensor of unit density about it (products
 * of inertia negated, as in the tensor)?
 *
 * @throws RangeError when the volume is zero: nothing has a centroid then
 */
export function centroidAndInertia({ volume, first, second, about }: MassProperties): { centroid: Vec3; inertia: [Vec3, Vec3, Vec3] } {
  if (!(Math.abs(volume) > 0)) throw new RangeError("no volume, no centroid");
  const gx = first[0] / volume, gy = first[1] / volume, gz = first[2] / volume;
  const xx = second[0] - volume * gx * gx, yy = second[1] - volume * gy * gy, zz = second[2] - volume * gz * gz;
  const xy = second[3] - volume * gx * gy, yz = second[4] - volume * gy * gz, zx = second[5] - volume * gz * gx;
  return {
    centroid: [about[0] + gx, about[1] + gy, about[2] + gz],
    inertia: [
      [yy + zz, -xy, -zx],
      [-xy, xx + zz, -yz],
      [-zx, -yz, xx + yy],
    ],
  };
}
