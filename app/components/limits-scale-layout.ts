export interface ScaleInput {
  lower: number | null;
  upper: number | null;
  readings: number[];
  uncertainty: number | null;
}

export interface PlacedScale {
  /** All positions are in drawing units from the left, 0 to `width`. */
  width: number;
  band: { from: number; to: number };
  limits: { at: number; value: number; anchor: "start" | "middle" | "end" }[];
  /** Half width of an undecided band. */
  undecided: number;
  /** `off`: lies beyond the drawn part of the scale, on that side. */
  readings: { at: number; off: -1 | 0 | 1; last: boolean }[];
}

const WIDTH = 360;
const EDGE = 22;

/**
 * Where limits, undecided bands and readings stand on a scale of 360 units. The limits keep about
 * the middle third; a reading far out stands at the edge and says so. One limit alone
 * is drawn with as much room on the open side as its reading asks for.
 *
 * @throws RangeError when a number is not finite or the lower limit lies above the upper
 */
export function placeOnScale({ lower, upper, readings, uncertainty }: ScaleInput): PlacedScale {
  for (const value of [lower, upper, uncertainty, ...readings]) {
    if (value !== null && !Number.isFinite(value)) throw new RangeError("a scale takes finite numbers");
  }
  if (lower !== null && upper !== null && lower > upper) throw new RangeError("the lower limit lies above the upper");
  const { from, to } = drawnRange({ lower, upper, readings, uncertainty });
  const perUnit = (WIDTH - 2 * EDGE) / (to - from);
  const at = (value: number) => EDGE + (value - from) * perUnit;
  const clamp = (x: number) => Math.min(WIDTH - 12, Math.max(12, x));
  const lowerAt = lower === null ? 4 : at(lower);
  const upperAt = upper === null ? WIDTH - 4 : at(upper);
  const close = lower !== null && upper !== null && lower < upper && upperAt - lowerAt < 60;
  return {
    width: WIDTH,
    band: lower === null && upper === null ? { from: 4, to: 4 } : { from: lowerAt, to: upperAt },
    limits: [
      ...(lower === null ? [] : [{ at: lowerAt, value: lower, anchor: close ? ("end" as const) : ("middle" as const) }]),
      ...(upper === null || upper === lower ? [] : [{ at: upperAt, value: upper, anchor: close ? ("start" as const) : ("middle" as const) }]),
    ],
    undecided: uncertainty === null ? 0 : Math.min(uncertainty * perUnit, WIDTH / 4),
    readings: readings.map((value, index) => ({
      at: clamp(at(value)),
      off: at(value) < 12 ? -1 : at(value) > WIDTH - 12 ? 1 : 0,
      last: index === readings.length - 1,
    })),
  };
}

function drawnRange({ lower, upper, readings, uncertainty }: ScaleInput): { from: number; to: number } {
  if (lower !== null && upper !== null && upper > lower) {
    const span = upper - lower;
    // A reading a little further out still gets its place; one far out would shrink the limits to a line.
    const room = (beyond: number) => (beyond <= span * 2 ? Math.max(span, beyond * 1.15) : span);
    const newest = readings.at(-1) ?? lower;
    return { from: lower - room(lower - newest), to: upper + room(newest - upper) };
  }
  const centre = lower ?? upper ?? readings[0] ?? 0;
  const furthest = Math.max(0, ...readings.map((value) => Math.abs(value - centre)));
  const half = Math.max(furthest * 1.25, (uncertainty ?? 0) * 4) || Math.abs(centre) * 0.01 || 1;
  return { from: centre - half, to: centre + half };
}

/** The same in words, for who can't see the drawing. */
export function scaleText({ lower, upper, readings, uncertainty }: ScaleInput, say: (value: number) => string): string {
  const limits =
    lower !== null && upper !== null ? `Limits ${say(lower)} to ${say(upper)}` : lower !== null ? `At least ${say(lower)}` : upper !== null ? `At most ${say(upper)}` : "No limits";
  const undecided = uncertainty ? `, undecided within ${say(uncertainty)} of a limit` : "";
  const read = readings.length ? `. Read ${readings.map(say).join(", ")}` : ". Not read yet";
  return limits + undecided + read;
}
