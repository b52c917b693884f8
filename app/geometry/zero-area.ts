/**
 * Is the area of a triangle exactly zero, in rational arithmetic on the coordinates as stored?
 *
 * Floating point answers where it can be sure; where differences are exact, a product is compared
 * with its rounding error (Dekker, "A floating-point technique for extending the available
 * precision", 1971); the rest is decided in whole numbers.
 *
 * @param vertices finite coordinates of at most single-precision size
 * @param a,b,c where the three numbers of each corner begin
 */
export function hasZeroArea(vertices: Float32Array | Float64Array, a: number, b: number, c: number): boolean {
  const ax = vertices[a]!, ay = vertices[a + 1]!, az = vertices[a + 2]!;
  const bx = vertices[b]!, by = vertices[b + 1]!, bz = vertices[b + 2]!;
  const cx = vertices[c]!, cy = vertices[c + 1]!, cz = vertices[c + 2]!;
  if (ax === bx && ay === by && az === bz) return true;
  if (bx === cx && by === cy && bz === cz) return true;
  if (cx === ax && cy === ay && cz === az) return true;
  const ux = bx - ax, uy = by - ay, uz = bz - az, vx = cx - ax, vy = cy - ay, vz = cz - az;
  if (
    isExact(ux, bx, ax) && isExact(uy, by, ay) && isExact(uz, bz, az) &&
    isExact(vx, cx, ax) && isExact(vy, cy, ay) && isExact(vz, cz, az) &&
    // Below this the rounding errors of the products would themselves underflow.
    [ux, uy, uz, vx, vy, vz].every((part) => part === 0 || Math.abs(part) > 1e-140)
  ) {
    return sameProduct(uy, vz, uz, vy) && sameProduct(uz, vx, ux, vz) && sameProduct(ux, vy, uy, vx);
  }
  return hasZeroAreaExactly([ax, ay, az, bx, by, bz, cx, cy, cz]);
}

/** Was `difference` = p - q rounded? (Knuth's two-sum, turned round.) */
function isExact(difference: number, p: number, q: number): boolean {
  const back = difference - p;
  return p - (difference - back) - (q + back) === 0;
}

/** Is p · q exactly r · s? */
function sameProduct(p: number, q: number, r: number, s: number): boolean {
  const one = p * q;
  return one === r * s && productError(p, q, one) === productError(r, s, one);
}

/** p · q minus its rounded value, exactly. */
function productError(p: number, q: number, product: number): number {
  const pBig = p * 134217729, qBig = q * 134217729; // 2^27 + 1 splits 53 bits in two halves
  const pHigh = pBig - (pBig - p), qHigh = qBig - (qBig - q);
  const pLow = p - pHigh, qLow = q - qHigh;
  return pLow * qLow - (product - pHigh * qHigh - pLow * qHigh - pHigh * qLow);
}

function hasZeroAreaExactly(numbers: number[]): boolean {
  const parts = numbers.map(split);
  const lowest = Math.min(...parts.map(({ exponent }) => exponent));
  const whole = parts.map(({ mantissa, exponent }) => mantissa << BigInt(exponent - lowest));
  const [ux, uy, uz] = [0, 1, 2].map((axis) => whole[3 + axis]! - whole[axis]!) as [bigint, bigint, bigint];
  const [vx, vy, vz] = [0, 1, 2].map((axis) => whole[6 + axis]! - whole[axis]!) as [bigint, bigint, bigint];
  return uy * vz === uz * vy && uz * vx === ux * vz && ux * vy === uy * vx;
}

/** A double as whole number times a power of two. */
function split(value: number): { mantissa: bigint; exponent: number } {
  if (value === 0) return { mantissa: 0n, exponent: 0 };
  const bits = new DataView(new ArrayBuffer(8));
  bits.setFloat64(0, value);
  const high = bits.getUint32(0);
  const biased = (high >>> 20) & 0x7ff;
  const fraction = (BigInt(high & 0xfffff) << 32n) | BigInt(bits.getUint32(4));
  const mantissa = biased === 0 ? fraction : fraction | (1n << 52n);
  return { mantissa: value < 0 ? -mantissa : mantissa, exponent: Math.max(biased, 1) - 1075 };
}
