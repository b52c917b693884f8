/** Facets that meet at less than this are one rounded surface; at more, an edge. */
export const CREASE_DEG = 30;

export interface ShadedMesh {
  positions: Float32Array;
  /** Unit normals, smooth across what is round and split at edges. */
  normals: Float32Array;
  indices: Uint32Array;
  /** Pairs of points: edges where facets meet sharply, and open borders. */
  edges: Float32Array;
}

/**
 * Normals for drawing, and the edges a person would see, of a welded mesh.
 *
 * @param indices three vertices a triangle, none of them twice in one triangle
 * @param positions x, y, z of each vertex
 */
export function shadeByCreases(indices: Uint32Array, positions: Float32Array): ShadedMesh {
  const triangles = indices.length / 3;
  const facets = facetNormals(indices, positions);
  const byEdge = new Map<number, number>();
  const vertices = positions.length / 3;
  const edges: number[] = [];
  // Corners (three a triangle) that share a normal are joined into sets.
  const parent = new Uint32Array(indices.length).map((_, corner) => corner);
  const root = (corner: number): number => {
    while (parent[corner] !== corner) corner = parent[corner] = parent[parent[corner]!]!;
    return corner;
  };
  const draw = (a: number, b: number) => {
    for (const vertex of [a, b]) edges.push(positions[vertex * 3]!, positions[vertex * 3 + 1]!, positions[vertex * 3 + 2]!);
  };
  const smooth = Math.cos((CREASE_DEG * Math.PI) / 180);

  for (let corner = 0; corner < indices.length; corner++) {
    const next = corner % 3 === 2 ? corner - 2 : corner + 1;
    const [a, b] = [indices[corner]!, indices[next]!];
    const key = Math.min(a, b) * vertices + Math.max(a, b);
    const other = byEdge.get(key);
    if (other === undefined) {
      byEdge.set(key, corner);
      continue;
    }
    byEdge.delete(key);
    const otherNext = other % 3 === 2 ? other - 2 : other + 1;
    if (cosine(facets, Math.floor(corner / 3), Math.floor(other / 3)) < smooth) {
      draw(a, b);
      continue;
    }
    const facing = indices[other] === b;
    parent[root(corner)] = root(facing ? otherNext : other);
    parent[root(next)] = root(facing ? other : otherNext);
  }
  for (const corner of byEdge.values()) draw(indices[corner]!, indices[corner % 3 === 2 ? corner - 2 : corner + 1]!);
  return { ...split(indices, positions, facets, triangles, root), edges: new Float32Array(edges) };
}

/** One vertex for each set of corners, with the sum of its facets' normals (weighted by their area). */
function split(indices: Uint32Array, positions: Float32Array, facets: Float32Array, triangles: number, root: (corner: number) => number) {
  const numberOf = new Int32Array(indices.length).fill(-1);
  const split = new Uint32Array(triangles * 3);
  let count = 0;
  for (let corner = 0; corner < indices.length; corner++) {
    const set = root(corner);
    if (numberOf[set] === -1) numberOf[set] = count++;
    split[corner] = numberOf[set]!;
  }
  const places = new Float32Array(count * 3);
  const normals = new Float32Array(count * 3);
  for (let corner = 0; corner < indices.length; corner++) {
    const facet = Math.floor(corner / 3) * 3;
    for (let axis = 0; axis < 3; axis++) {
      places[split[corner]! * 3 + axis] = positions[indices[corner]! * 3 + axis]!;
      normals[split[corner]! * 3 + axis]! += facets[facet + axis]!;
    }
  }
  for (let i = 0; i < normals.length; i += 3) {
    const size = Math.hypot(normals[i]!, normals[i + 1]!, normals[i + 2]!);
    if (size > 0) for (let axis = 0; axis < 3; axis++) normals[i + axis]! /= size;
    else normals[i + 2] = 1;
  }
  return { positions: places, normals, indices: split };
}

/** Of twice the facet's area. */
function facetNormals(indices: Uint32Array, positions: Float32Array): Float32Array {
  const normals = new Float32Array(indices.length);
  for (let i = 0; i < indices.length; i += 3) {
    const [a, b, c] = [indices[i]! * 3, indices[i + 1]! * 3, indices[i + 2]! * 3];
    const [ux, uy, uz] = [positions[b]! - positions[a]!, positions[b + 1]! - positions[a + 1]!, positions[b + 2]! - positions[a + 2]!];
    const [vx, vy, vz] = [positions[c]! - positions[a]!, positions[c + 1]! - positions[a + 1]!, positions[c + 2]! - positions[a + 2]!];
    normals[i] = uy * vz - uz * vy;
    normals[i + 1] = uz * vx - ux * vz;
    normals[i + 2] = ux * vy - uy * vx;
  }
  return normals;
}

function cosine(facets: Float32Array, one: number, other: number): number {
  const [a, b] = [one * 3, other * 3];
  const sizes = Math.hypot(facets[a]!, facets[a + 1]!, facets[a + 2]!) * Math.hypot(facets[b]!, facets[b + 1]!, facets[b + 2]!);
  // A facet without area bends nothing.
  return sizes === 0 ? 1 : (facets[a]! * facets[b]! + facets[a + 1]! * facets[b + 1]! + facets[a + 2]! * facets[b + 2]!) / sizes;
}
