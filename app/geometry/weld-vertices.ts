/** Triangles that share their vertices. */
export interface WeldedMesh<Coordinates extends Float32Array | Float64Array = Float32Array | Float64Array> {
  /** Three vertex numbers a triangle, in the order of the input. */
  indices: Uint32Array;
  /** x, y, z of each vertex, in order of first appearance. */
  vertices: Coordinates;
  vertexCount: number;
}

/** Takes corners as they arrive, so that they need never be held all at once. */
export interface Welder<Coordinates extends Float32Array | Float64Array> {
  /** @param coordinates three finite numbers a corner; not kept, so the caller may reuse it */
  add(coordinates: Coordinates): void;
  finish(): WeldedMesh<Coordinates>;
}

/** Vertex numbers live in 32-bit slots of the table. */
const MOST_VERTICES = 2 ** 31 - 2;
/** Beyond this share of full slots, runs in the table grow long. */
const FULL = 0.7;
/** Corners between two looks at how full the tables are. */
const BLOCK = 2048;

/**
 * Which corners are the same vertex?
 *
 * Corners are one vertex when their coordinates are equal bit for bit; -0 equals 0. Nothing is
 * moved or rounded: a mesh that is open by one unit in the last place stays open.
 *
 * @param coordinates three finite numbers a corner; not changed
 * @throws RangeError when the length is no multiple of 3, or beyond two thousand million vertices
 */
export function weldVertices<Coordinates extends Float32Array | Float64Array>(coordinates: Coordinates): WeldedMesh<Coordinates> {
  const welder = createWelder<Coordinates>(coordinates.BYTES_PER_ELEMENT === 4 ? "single" : "double", coordinates.length / 3);
  welder.add(coordinates);
  return welder.finish();
}

/**
 * The same, piece by piece.
 *
 * @param precision of the coordinates to come: Float32Array or Float64Array
 * @param expectedCorners sizes the first tables; any number is right, a good one saves copying
 */
export function createWelder<Coordinates extends Float32Array | Float64Array>(precision: "single" | "double", expectedCorners: number): Welder<Coordinates> {
  const words = precision === "single" ? 3 : 6;
  const state = new WelderState(words, Math.ceil(expectedCorners));
  return {
    add(coordinates) {
      if (coordinates.length % 3 !== 0) throw new RangeError("coordinates must come in threes");
      if (coordinates.BYTES_PER_ELEMENT * 3 !== words * 4) throw new RangeError(`coordinates must be of ${precision} precision`);
      const corners = coordinates.length / 3;
      state.makeRoomForCorners(corners);
      const input = new Int32Array(coordinates.buffer, coordinates.byteOffset, corners * words);
      for (let from = 0; from < corners; from += BLOCK) {
        const some = Math.min(BLOCK, corners - from);
        state.makeRoomForVertices(some);
        if (words === 3) addSingle(state, input, from * words, some);
        else addDouble(state, input, from * words, some);
      }
    },
    finish() {
      const vertices = words === 3 ? new Float32Array(state.words.buffer, 0, state.count * 3) : new Float64Array(state.words.buffer, 0, state.count * 3);
      return { indices: state.indices.subarray(0, state.corners), vertices: vertices as Coordinates, vertexCount: state.count };
    },
  };
}

/** Unique vertices as bit patterns, found through an open-addressing table of vertex numbers + 1. */
class WelderState {
  corners = 0;
  indices: Uint32Array;
  count = 0;
  words: Int32Array;
  table: Int32Array;

  constructor(
    readonly wordsPerVertex: number,
    expectedCorners: number,
  ) {
    this.indices = new Uint32Array(expectedCorners);
    // A closed mesh has half as many vertices as triangles, a sixth of its corners.
    const vertices = Math.ceil(expectedCorners / 6) + 2 * BLOCK;
    this.words = new Int32Array(vertices * wordsPerVertex);
    this.table = new Int32Array(2 ** Math.ceil(Math.log2(vertices / FULL)));
  }

  makeRoomForCorners(more: number): void {
    if (this.corners + more <= this.indices.length) return;
    const larger = new Uint32Array(Math.ceil(Math.max(this.corners + more, this.indices.length * 1.5)));
    larger.set(this.indices);
    this.indices = larger;
  }

  /** Beforehand, so that the loops need not ask at every corner. */
  makeRoomForVertices(more: number): void {
    const needed = this.count + more;
    if (needed > MOST_VERTICES) throw new RangeError("too many vertices");
    if (needed * this.wordsPerVertex > this.words.length) {
      const larger = new Int32Array(Math.ceil(needed * 1.5) * this.wordsPerVertex);
      larger.set(this.words);
      this.words = larger;
    }
    if (needed > this.table.length * FULL) this.#growTable();
  }

  #growTable(): void {
    const words = this.words;
    const table = new Int32Array(this.table.length * 2);
    const mask = table.length - 1;
    for (let vertex = 0, at = 0; vertex < this.count; vertex++, at += this.wordsPerVertex) {
      let slot =
        (this.wordsPerVertex === 3
          ? hash(words[at]!, words[at + 1]!, words[at + 2]!)
          : hash(folded(words[at]!, words[at + 1]!), folded(words[at + 2]!, words[at + 3]!), folded(words[at + 4]!, words[at + 5]!))) & mask;
      while (table[slot] !== 0) slot = (slot + 1) & mask;
      table[slot] = vertex + 1;
    }
    this.table = table;
  }
}

const NEGATIVE_ZERO = -2147483648;

function addSingle(state: WelderState, input: Int32Array, start: number, corners: number): void {
  const { table, words, indices } = state;
  const mask = table.length - 1;
  let count = state.count;
  let corner = state.corners;
  for (let i = 0, at = start; i < corners; i++, at += 3) {
    let x = input[at]!, y = input[at + 1]!, z = input[at + 2]!;
    if (x === NEGATIVE_ZERO) x = 0;
    if (y === NEGATIVE_ZERO) y = 0;
    if (z === NEGATIVE_ZERO) z = 0;
    let slot = hash(x, y, z) & mask;
    let vertex = 0;
    for (;;) {
      vertex = table[slot]! - 1;
      if (vertex < 0) {
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
    indices[corner++] = vertex;
  }
  state.count = count;
  state.corners = corner;
}

/** As addSingle, with two words a coordinate: low half first, as every machine we run on stores them. */
function addDouble(state: WelderState, input: Int32Array, start: number, corners: number): void {
  const { table, words, indices } = state;
  const mask = table.length - 1;
  let count = state.count;
  let corner = state.corners;
  for (let i = 0, at = start; i < corners; i++, at += 6) {
    const x0 = input[at]!, y0 = input[at + 2]!, z0 = input[at + 4]!;
    let x1 = input[at + 1]!, y1 = input[at + 3]!, z1 = input[at + 5]!;
    if (x1 === NEGATIVE_ZERO && x0 === 0) x1 = 0;
    if (y1 === NEGATIVE_ZERO && y0 === 0) y1 = 0;
    if (z1 === NEGATIVE_ZERO && z0 === 0) z1 = 0;
    let slot = hash(folded(x0, x1), folded(y0, y1), folded(z0, z1)) & mask;
    let vertex = 0;
    for (;;) {
      vertex = table[slot]! - 1;
      if (vertex < 0) {
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
    indices[corner++] = vertex;
  }
  state.count = count;
  state.corners = corner;
}

/** Both halves of a double in one word. */
const folded = (low: number, high: number) => low ^ Math.imul(high, 0x9e3779b1);

/** Coordinates of parts often differ in a few high bits only: shifts bring those down to where the table looks. */
function hash(x: number, y: number, z: number): number {
  let h = Math.imul(x ^ (x >>> 15), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13) ^ y, 0xc2b2ae35);
  h = Math.imul(h ^ (h >>> 16) ^ z, 0x27d4eb2f);
  return h ^ (h >>> 15);
}
