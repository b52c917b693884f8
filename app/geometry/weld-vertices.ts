/** Triangles that share their vertices. */
export interface WeldedMesh<Coordinates extends Float32Array | Float64Array = Float32Array | Float64Array> {
  /** Three vertex numbers a triangle, in the order of the input. */
  indices: Uint32Array;
  /** x, y, z of each vertex, in order of first appearance. */
  vertices: Coordinates;
  vertexCount: number;
}

/** One more triangle corner and an index would not fit the table's 32-bit slots. */
const MOST_CORNERS = 2 ** 31 - 2;

/**
 * Which corners are the same vertex?
 *
 * Corners are one vertex when their coordinates are equal bit for bit; -0 equals 0. Nothing is
 * moved or rounded: a mesh that is open by one unit in the last place stays open.
 *
 * @param coordinates three numbers a corner, finite; not changed
 * @param onProgress called now and then with the share done, 0 to 1
 * @throws RangeError when the length is no multiple of 3, or beyond two thousand million corners
 */
export function weldVertices<Coordinates extends Float32Array | Float64Array>(
  coordinates: Coordinates,
  onProgress?: (share: number) => void,
): WeldedMesh<Coordinates> {
  if (coordinates.length % 3 !== 0) throw new RangeError("coordinates must come in threes");
  const corners = coordinates.length / 3;
  if (corners > MOST_CORNERS) throw new RangeError("too many corners");
  const indices = new Uint32Array(corners);
  const wordsPerVertex = (3 * coordinates.BYTES_PER_ELEMENT) / 4;
  const input = new Int32Array(coordinates.buffer, coordinates.byteOffset, corners * wordsPerVertex);
  const store = new VertexStore(wordsPerVertex, corners);
  const block = 1 << 18;
  for (let from = 0; from < corners; from += block) {
    const to = Math.min(corners, from + block);
    if (wordsPerVertex === 3) weldSingle(store, input, indices, from, to);
    else weldDouble(store, input, indices, from, to);
    onProgress?.(to / corners);
  }
  const words = store.words;
  const vertices =
    wordsPerVertex === 3 ? new Float32Array(words.buffer, 0, store.count * 3) : new Float64Array(words.buffer, 0, store.count * 3);
  return { indices, vertices: vertices as Coordinates, vertexCount: store.count };
}

/** Unique vertices as bit patterns, found through an open-addressing table of vertex numbers + 1. */
class VertexStore {
  count = 0;
  words: Int32Array;
  table: Int32Array;
  /** Vertices that fit before words or table must grow: the table is kept at most half full. */
  room: number;

  constructor(
    readonly wordsPerVertex: number,
    corners: number,
  ) {
    // A closed mesh has half as many vertices as triangles, a sixth of its corners.
    this.room = Math.max(64, 2 ** Math.ceil(Math.log2(corners / 6 + 16)));
    this.words = new Int32Array(this.room * wordsPerVertex);
    this.table = new Int32Array(this.room * 2);
  }

  grow(): void {
    this.room *= 2;
    const words = new Int32Array(this.room * this.wordsPerVertex);
    words.set(this.words);
    this.words = words;
    const table = (this.table = new Int32Array(this.room * 2));
    const mask = table.length - 1;
    const n = this.wordsPerVertex;
    for (let vertex = 0; vertex < this.count; vertex++) {
      const at = vertex * n;
      let slot =
        n === 3
          ? hash(words[at]!, words[at + 1]!, words[at + 2]!)
          : hash(words[at]! ^ spread(words[at + 1]!), words[at + 2]! ^ spread(words[at + 3]!), words[at + 4]! ^ spread(words[at + 5]!));
      for (slot &= mask; table[slot] !== 0; slot = (slot + 1) & mask);
      table[slot] = vertex + 1;
    }
  }
}

const NEGATIVE_ZERO = -2147483648;

function weldSingle(store: VertexStore, input: Int32Array, indices: Uint32Array, from: number, to: number): void {
  let { table, words, room, count } = store;
  let mask = table.length - 1;
  for (let corner = from, at = from * 3; corner < to; corner++, at += 3) {
    let x = input[at]!, y = input[at + 1]!, z = input[at + 2]!;
    if (x === NEGATIVE_ZERO) x = 0;
    if (y === NEGATIVE_ZERO) y = 0;
    if (z === NEGATIVE_ZERO) z = 0;
    let slot = hash(x, y, z) & mask;
    let vertex = 0;
    for (;;) {
      vertex = table[slot]! - 1;
      if (vertex < 0) {
        if (count === room) {
          store.count = count;
          store.grow();
          ({ table, words, room } = store);
          mask = table.length - 1;
          for (slot = hash(x, y, z) & mask; table[slot] !== 0; slot = (slot + 1) & mask);
        }
        vertex = count++;
        table[slot] = count;
        words[vertex * 3] = x;
        words[vertex * 3 + 1] = y;
        words[vertex * 3 + 2] = z;
        break;
      }
      const v = vertex * 3;
      if (words[v] === x && words[v + 1] === y && words[v + 2] === z) break;
      slot = (slot + 1) & mask;
    }
    indices[corner] = vertex;
  }
  store.count = count;
}

/** As weldSingle, with two words a coordinate: low half first, as every machine we run on stores them. */
function weldDouble(store: VertexStore, input: Int32Array, indices: Uint32Array, from: number, to: number): void {
  let { table, words, room, count } = store;
  let mask = table.length - 1;
  for (let corner = from, at = from * 6; corner < to; corner++, at += 6) {
    const x0 = input[at]!, y0 = input[at + 2]!, z0 = input[at + 4]!;
    let x1 = input[at + 1]!, y1 = input[at + 3]!, z1 = input[at + 5]!;
    if (x1 === NEGATIVE_ZERO && x0 === 0) x1 = 0;
    if (y1 === NEGATIVE_ZERO && y0 === 0) y1 = 0;
    if (z1 === NEGATIVE_ZERO && z0 === 0) z1 = 0;
    const hashed = hash(x0 ^ spread(x1), y0 ^ spread(y1), z0 ^ spread(z1));
    let slot = hashed & mask;
    let vertex = 0;
    for (;;) {
      vertex = table[slot]! - 1;
      if (vertex < 0) {
        if (count === room) {
          store.count = count;
          store.grow();
          ({ table, words, room } = store);
          mask = table.length - 1;
          for (slot = hashed & mask; table[slot] !== 0; slot = (slot + 1) & mask);
        }
        vertex = count++;
        table[slot] = count;
        const v = vertex * 6;
        words[v] = x0; words[v + 1] = x1; words[v + 2] = y0; words[v + 3] = y1; words[v + 4] = z0; words[v + 5] = z1;
        break;
      }
      const v = vertex * 6;
      if (words[v] === x0 && words[v + 1] === x1 && words[v + 2] === y0 && words[v + 3] === y1 && words[v + 4] === z0 && words[v + 5] === z1) break;
      slot = (slot + 1) & mask;
    }
    indices[corner] = vertex;
  }
  store.count = count;
}

const spread = (word: number) => Math.imul(word, 0x9e3779b1) | 0;

/** Coordinates of parts differ in a few high bits only, so every bit must reach the low ones. */
function hash(x: number, y: number, z: number): number {
  let h = Math.imul(x, 0x85ebca6b) ^ (Math.imul(y, 0xc2b2ae35) + (z << 15 | z >>> 17)) ^ Math.imul(z, 0x27d4eb2f);
  h = Math.imul(h ^ (h >>> 16), 0x7feb352d);
  return h ^ (h >>> 15);
}
