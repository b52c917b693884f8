import type { Vec3 } from "#app/geometry/measure-document.ts";

export interface DrawnPicture {
  width: number;
  height: number;
  /** RGBA, row by row from the top; transparent where there is nothing. */
  pixels: Uint8ClampedArray;
}

/** Ink and paper of the printed sheet; the light end is near paper, the dark end a mid blue-grey. */
const light: Vec3 = [232, 236, 239];
const dark: Vec3 = [128, 146, 160];
const ink: Vec3 = [13, 43, 69];
/** From upper left, in front: the shading of a drawing. */
const lamp: Vec3 = [-0.45, 0.6, 0.66];
/** Drawn twice as large and averaged, so that edges are not ragged. */
const oversampling = 2;
/** A depth step between neighbours beyond this share of the size is an outline. */
const outlineStep = 0.02;

/**
 * Draws a triangle mesh in isometric view, flat and matt, with its outlines in ink.
 *
 * @param positions x, y, z per vertex, mm
 * @param indices three per triangle
 * @returns a picture with the mesh centred and filling it but for a margin
 */
export function drawPicture(positions: Float32Array, indices: Uint32Array, width: number, height: number): DrawnPicture {
  const w = width * oversampling;
  const h = height * oversampling;
  const { x, y, z, normalOf } = project(positions, w, h);
  const depth = new Float32Array(w * h).fill(-Infinity);
  const shade = new Float32Array(w * h);
  for (let t = 0; t < indices.length; t += 3) {
    const a = indices[t]!, b = indices[t + 1]!, c = indices[t + 2]!;
    fill(x, y, z, a, b, c, normalOf(a, b, c), depth, shade, w, h);
  }
  return average(paint(depth, shade, w, h, Math.max(w, h)), w, h);
}

// Isometric: turned 45° about z, tipped by asin(1/√3); x right, y up, z towards the eye.
const half = Math.SQRT1_2;
const tip = Math.asin(1 / Math.sqrt(3));

function view(px: number, py: number, pz: number): Vec3 {
  const x = (px - py) * half;
  const away = (px + py) * half;
  return [x, pz * Math.cos(tip) + away * Math.sin(tip), pz * Math.sin(tip) - away * Math.cos(tip)];
}

function project(positions: Float32Array, w: number, h: number) {
  const count = positions.length / 3;
  const x = new Float32Array(count), y = new Float32Array(count), z = new Float32Array(count);
  let minX = Infinity, maxX = -Infinity, minY = Infinity, maxY = -Infinity;
  for (let i = 0; i < count; i++) {
    const [vx, vy, vz] = view(positions[3 * i]!, positions[3 * i + 1]!, positions[3 * i + 2]!);
    x[i] = vx; y[i] = vy; z[i] = vz;
    minX = Math.min(minX, vx); maxX = Math.max(maxX, vx);
    minY = Math.min(minY, vy); maxY = Math.max(maxY, vy);
  }
  const scale = 0.9 * Math.min(w / Math.max(maxX - minX, 1e-9), h / Math.max(maxY - minY, 1e-9));
  for (let i = 0; i < count; i++) {
    x[i] = w / 2 + (x[i]! - (minX + maxX) / 2) * scale;
    y[i] = h / 2 - (y[i]! - (minY + maxY) / 2) * scale;
    z[i] = z[i]! * scale;
  }
  // In picture space y points down, so the normal's y is turned back.
  const normalOf = (a: number, b: number, c: number): Vec3 => {
    const ux = x[b]! - x[a]!, uy = y[a]! - y[b]!, uz = z[b]! - z[a]!;
    const vx = x[c]! - x[a]!, vy = y[a]! - y[c]!, vz = z[c]! - z[a]!;
    const n: Vec3 = [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
    const length = Math.hypot(...n) || 1;
    return [n[0] / length, n[1] / length, n[2] / length];
  };
  return { x, y, z, normalOf };
}

function fill(x: Float32Array, y: Float32Array, z: Float32Array, a: number, b: number, c: number, normal: Vec3, depth: Float32Array, shade: Float32Array, w: number, h: number): void {
  const ax = x[a]!, ay = y[a]!, bx = x[b]!, by = y[b]!, cx = x[c]!, cy = y[c]!;
  const area = (bx - ax) * (cy - ay) - (cx - ax) * (by - ay);
  if (area === 0) return;
  // A mesh that runs the wrong way round is drawn all the same: both sides are lit.
  const facing = normal[2] < 0 ? -1 : 1;
  const lit = Math.max(0, facing * (normal[0] * lamp[0] + normal[1] * lamp[1] + normal[2] * lamp[2]));
  const fromX = Math.max(0, Math.floor(Math.min(ax, bx, cx))), toX = Math.min(w - 1, Math.ceil(Math.max(ax, bx, cx)));
  const fromY = Math.max(0, Math.floor(Math.min(ay, by, cy))), toY = Math.min(h - 1, Math.ceil(Math.max(ay, by, cy)));
  for (let py = fromY; py <= toY; py++) {
    for (let px = fromX; px <= toX; px++) {
      const sx = px + 0.5, sy = py + 0.5;
      const u = ((bx - sx) * (cy - sy) - (cx - sx) * (by - sy)) / area;
      const v = ((cx - sx) * (ay - sy) - (ax - sx) * (cy - sy)) / area;
      const s = 1 - u - v;
      if (u < 0 || v < 0 || s < 0) continue;
      const at = py * w + px;
      const d = u * z[a]! + v * z[b]! + s * z[c]!;
      if (d > depth[at]!) {
        depth[at] = d;
        shade[at] = lit;
      }
    }
  }
}

function paint(depth: Float32Array, shade: Float32Array, w: number, h: number, size: number): Uint8ClampedArray {
  const pixels = new Uint8ClampedArray(w * h * 4);
  const step = size * outlineStep;
  for (let y = 0; y < h; y++) {
    for (let x = 0; x < w; x++) {
      const at = y * w + x;
      const here = depth[at]!;
      if (here === -Infinity) continue;
      let outline = false;
      for (const [dx, dy] of [[1, 0], [-1, 0], [0, 1], [0, -1]] as const) {
        const nx = x + dx, ny = y + dy;
        const there = nx < 0 || ny < 0 || nx >= w || ny >= h ? -Infinity : depth[ny * w + nx]!;
        if (here - there > step || Math.abs(shade[at]! - (there === -Infinity ? shade[at]! : shade[ny * w + nx]!)) > 0.25) outline = true;
      }
      const lit = shade[at]!;
      for (let c = 0; c < 3; c++) pixels[4 * at + c] = outline ? ink[c]! : dark[c]! + (light[c]! - dark[c]!) * lit;
      pixels[4 * at + 3] = 255;
    }
  }
  return pixels;
}

function average(large: Uint8ClampedArray, w: number, h: number): DrawnPicture {
  const width = w / oversampling, height = h / oversampling;
  const pixels = new Uint8ClampedArray(width * height * 4);
  const share = oversampling * oversampling;
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      let alpha = 0;
      const sum = [0, 0, 0];
      for (let j = 0; j < oversampling; j++) {
        for (let i = 0; i < oversampling; i++) {
          const at = 4 * ((y * oversampling + j) * w + x * oversampling + i);
          const a = large[at + 3]!;
          alpha += a;
          for (let c = 0; c < 3; c++) sum[c] = sum[c]! + large[at + c]! * a;
        }
      }
      const to = 4 * (y * width + x);
      for (let c = 0; c < 3; c++) pixels[to + c] = alpha === 0 ? 0 : sum[c]! / alpha;
      pixels[to + 3] = alpha / share;
    }
  }
  return { width, height, pixels };
}
