/** How the triangles of a mesh meet. */
export interface EdgeCounts {
  edges: number;
  /** Edges with one triangle. */
  openEdges: number;
  /** Edges with more than two triangles. */
  nonManifoldEdges: number;
  /** Edges whose two triangles run along them the same way. */
  misorientedEdges: number;
  /** Components of triangles connected over shared edges. */
  shells: number;
  /** Triangles that have a vertex twice; they have no part in the counts above. */
  repeatedVertexTriangles: number;
}

/** Fields of an edge record: other vertex, next edge at the same vertex, what was seen. */
const WORDS = 3;
/** In the third word: uses, as 1, 2, 3 (three or more), flags, and above them a triangle. */
const USES = 3;
const FIRST_ASCENDS = 4;
const SAME_WAY = 8;
const TRIANGLE_SHIFT = 4;
const MOST_TRIANGLES = 2 ** 28;

/** Edge records walked per half edge before lists are laid out so that no vertex can have a long one. */
const PATIENCE = 24;

/**
 * Is the surface closed, and do its triangles agree about which side is outside?
 *
 * Each edge is kept in the list of one of its two vertices. Ordinary meshes have three edges at a
 * vertex; where a hub with very many would make lists long, each edge goes to the vertex with
 * fewer, which bounds a list by the square root of twice the edges.
 *
 * @param indices three vertex numbers a triangle, below `vertexCount`
 * @throws RangeError beyond 268 million triangles
 */
export function countEdges(indices: Uint32Array, vertexCount: number, onProgress?: (share: number) => void): EdgeCounts {
  if (indices.length / 3 > MOST_TRIANGLES) throw new RangeError("too many triangles");
  return gather(indices, vertexCount, null, onProgress) ?? gather(indices, vertexCount, valences(indices, vertexCount), onProgress)!;
}

function gather(indices: Uint32Array, vertexCount: number, rank: Uint32Array | null, onProgress?: (share: number) => void): EdgeCounts | null {
  const triangles = indices.length / 3;
  // Edge numbers are stored + 1, so that fresh memory means "none".
  const heads = new Int32Array(vertexCount);
  // A closed mesh has three edges for two triangles.
  let records = new Int32Array((Math.ceil(triangles * 1.5) + 64) * WORDS);
  const parent = new Int32Array(triangles);
  let edges = 0;
  let repeated = 0;
  let patience = rank ? Infinity : PATIENCE * indices.length;
  let joined = 0;

  for (let triangle = 0, at = 0; triangle < triangles; triangle++, at += 3) {
    const a = indices[at]!, b = indices[at + 1]!, c = indices[at + 2]!;
    parent[triangle] = triangle;
    if (a === b || b === c || c === a) {
      repeated++;
      continue;
    }
    if ((edges + 3) * WORDS > records.length) {
      const larger = new Int32Array(Math.ceil((edges + 3) * 1.5) * WORDS);
      larger.set(records);
      records = larger;
    }
    let root = triangle;
    for (let side = 0, from = a, to = b; side < 3; side++, from = to, to = side === 1 ? c : a) {
      const ascends = from < to;
      const keepAtFrom = rank === null || rank[from] === rank[to] ? ascends : rank[from]! < rank[to]!;
      const keeper = keepAtFrom ? from : to;
      const other = keepAtFrom ? to : from;
      let edge = heads[keeper]! - 1;
      let steps = 0;
      while (edge >= 0 && records[edge * WORDS] !== other) {
        edge = records[edge * WORDS + 1]! - 1;
        steps++;
      }
      patience -= steps;
      if (edge < 0) {
        const record = edges * WORDS;
        records[record] = other;
        records[record + 1] = heads[keeper]!;
        records[record + 2] = (triangle << TRIANGLE_SHIFT) | 1 | (ascends ? FIRST_ASCENDS : 0);
        heads[keeper] = ++edges;
      } else {
        const record = edge * WORDS;
        const seen = records[record + 2]!;
        if ((seen & USES) === 1) records[record + 2] = (seen + 1) | (((seen & FIRST_ASCENDS) !== 0) === ascends ? SAME_WAY : 0);
        else if ((seen & USES) === 2) records[record + 2] = seen + 1;
        let neighbour = seen >>> TRIANGLE_SHIFT;
        while (parent[neighbour] !== neighbour) neighbour = parent[neighbour] = parent[parent[neighbour]!]!;
        if (neighbour !== root) {
          // The older root stays: paths are short, as triangles of a file follow each other.
          if (neighbour < root) {
            parent[root] = neighbour;
            root = neighbour;
          } else parent[neighbour] = root;
          joined++;
        }
      }
    }
    if (patience < 0) return null;
    if ((triangle & 0x3ffff) === 0x3ffff) onProgress?.(triangle / triangles);
  }

  let openEdges = 0, nonManifoldEdges = 0, misorientedEdges = 0;
  for (let record = WORDS - 1; record < edges * WORDS; record += WORDS) {
    const seen = records[record]!;
    const uses = seen & USES;
    if (uses === 1) openEdges++;
    else if (uses === 3) nonManifoldEdges++;
    else if ((seen & SAME_WAY) !== 0) misorientedEdges++;
  }
  return { edges, openEdges, nonManifoldEdges, misorientedEdges, shells: triangles - repeated - joined, repeatedVertexTriangles: repeated };
}

function valences(indices: Uint32Array, vertexCount: number): Uint32Array {
  const valence = new Uint32Array(vertexCount);
  for (let i = 0; i < indices.length; i++) valence[indices[i]!]!++;
  return valence;
}
