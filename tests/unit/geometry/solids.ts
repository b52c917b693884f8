/** Solids with known measures, as nine coordinates a triangle, counterclockwise seen from outside. */

export type Point = [number, number, number];

export function trianglesOf(points: Point[], faces: number[][]): Float64Array {
  // Convex faces as fans.
  const out: number[] = [];
  for (const face of faces) for (let i = 1; i + 1 < face.length; i++) for (const corner of [0, i, i + 1]) out.push(...points[face[corner]!]!);
  return Float64Array.from(out);
}

export function box(x: number, y: number, z: number): Float64Array {
  const points: Point[] = [0, 1, 2, 3, 4, 5, 6, 7].map((i) => [i & 1 ? x : 0, i & 2 ? y : 0, i & 4 ? z : 0]);
  return trianglesOf(points, [[0, 2, 3, 1], [4, 5, 7, 6], [0, 1, 5, 4], [2, 6, 7, 3], [0, 4, 6, 2], [1, 3, 7, 5]]);
}

/** A prism over a regular polygon of `n` corners on a circle of `radius`, from z = 0 to `height`. */
export function prism(n: number, radius: number, height: number): Float64Array {
  const ring = (z: number) => Array.from({ length: n }, (_, i): Point => [radius * Math.cos((2 * Math.PI * i) / n), radius * Math.sin((2 * Math.PI * i) / n), z]);
  const around = Array.from({ length: n }, (_, i) => i);
  return trianglesOf(
    [...ring(0), ...ring(height)],
    [around.toReversed(), around.map((i) => n + i), ...around.map((i) => [i, (i + 1) % n, n + ((i + 1) % n), n + i])],
  );
}

/** A grid over two angles closed both ways: a torus about z. */
export function torus(major: number, minor: number, around: number, across: number): Float64Array {
  const points: Point[] = [];
  const faces: number[][] = [];
  for (let i = 0; i < around; i++) {
    for (let j = 0; j < across; j++) {
      const u = (2 * Math.PI * i) / around, v = (2 * Math.PI * j) / across;
      points.push([(major + minor * Math.cos(v)) * Math.cos(u), (major + minor * Math.cos(v)) * Math.sin(u), minor * Math.sin(v)]);
      const right = (i + 1) % around, up = (j + 1) % across;
      faces.push([i * across + j, right * across + j, right * across + up, i * across + up]);
    }
  }
  return trianglesOf(points, faces);
}

/** A sphere of meridians and parallels. */
export function sphere(radius: number, meridians: number, parallels: number): Float64Array {
  const at = (i: number, j: number): Point => {
    const u = (2 * Math.PI * (i % meridians)) / meridians, v = (Math.PI * j) / parallels;
    if (j === 0 || j === parallels) return [0, 0, j === 0 ? radius : -radius];
    return [radius * Math.sin(v) * Math.cos(u), radius * Math.sin(v) * Math.sin(u), radius * Math.cos(v)];
  };
  const out: number[] = [];
  for (let i = 0; i < meridians; i++) {
    for (let j = 0; j < parallels; j++) {
      if (j > 0) out.push(...at(i, j), ...at(i, j + 1), ...at(i + 1, j));
      if (j < parallels - 1) out.push(...at(i + 1, j), ...at(i, j + 1), ...at(i + 1, j + 1));
    }
  }
  return Float64Array.from(out);
}

export function binaryStl(coordinates: ArrayLike<number>, { header = "", count = coordinates.length / 9 } = {}): Uint8Array {
  const triangles = coordinates.length / 9;
  const bytes = new Uint8Array(84 + 50 * triangles);
  bytes.set(new TextEncoder().encode(header).subarray(0, 80));
  const view = new DataView(bytes.buffer);
  view.setUint32(80, count, true);
  for (let i = 0; i < coordinates.length; i++) view.setFloat32(84 + Math.floor(i / 9) * 50 + 12 + (i % 9) * 4, coordinates[i]!, true);
  return bytes;
}

export function asciiStl(coordinates: ArrayLike<number>, name = "part"): Uint8Array {
  let text = `solid ${name}\n`;
  for (let at = 0; at < coordinates.length; at += 9) {
    const corner = (k: number) => `vertex ${coordinates[at + 3 * k]} ${coordinates[at + 3 * k + 1]} ${coordinates[at + 3 * k + 2]}\n`;
    text += `facet normal 0 0 0\nouter loop\n${corner(0)}${corner(1)}${corner(2)}endloop\nendfacet\n`;
  }
  return new TextEncoder().encode(`${text}endsolid ${name}\n`);
}
