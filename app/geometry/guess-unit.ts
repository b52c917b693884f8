/**
 * Does a part of this size hint at another unit than millimetres?
 *
 * A guess to offer to a person, never to apply. Shop practice, no source: parts that go on a
 * machine are between a fingertip and a metre.
 *
 * @param largestSize longest side of the bounding box, in the file's own numbers
 * @returns units under which the part would have an ordinary size, likeliest first; empty when
 *   millimetres are as good a reading as any
 */
export function guessUnits(largestSize: number): ("in" | "m")[] {
  if (!(largestSize > 0)) return [];
  if (largestSize < 1) return ["m", "in"];
  if (largestSize < 10) return ["in"];
  return [];
}
