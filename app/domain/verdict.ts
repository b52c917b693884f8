/** Limits of a characteristic, in its own unit; null on the side where there is none. */
export interface Limits {
  low: number | null;
  high: number | null;
}

export type CharacteristicKind = "limits" | "min" | "max" | "yes-no";

/** As much of a characteristic as a verdict needs; lengths in mm, others in the characteristic's unit. */
export interface JudgedCharacteristic {
  kind: CharacteristicKind;
  /** What a print must hold; a print can't hold what metal can. */
  printLimits: Limits | null;
  /** What the cut piece must hold. */
  finalLimits: Limits | null;
  /** How many places must be read; all of them must be inside. */
  places: number;
  critical: boolean;
}

export interface JudgingConditions {
  /** Expanded uncertainty U of the instrument (about 95 %), in the characteristic's unit; null when unknown. */
  uncertainty: number | null;
  stage: "print" | "final";
}

export type PlaceVerdict = "conforms" | "fails" | "undecided";
/** "incomplete": nothing failed, but places or limits are missing. */
export type Verdict = PlaceVerdict | "incomplete";

export interface Judgement {
  verdict: Verdict;
  rule: "simple acceptance" | "ISO 14253-1";
  /** The limits judged by; null for yes/no and where none are stated. */
  limits: Limits | null;
  /** One verdict a reading, in the order given; `outBy` is how far beyond the stated limit, 0 inside. */
  places: { verdict: PlaceVerdict; outBy: number }[];
  /** The largest `outBy`. */
  outBy: number;
  placesMissing: number;
  /** U is above an eighth of the total tolerance; null where that can't be said. */
  coarse: boolean | null;
  remarks: string[];
}

/**
 * Two values closer than this are the same reading: 62.2 - 0.05 is not 62.15 in binary. A thousandth
 * of a micrometre when the unit is mm, far below any shop instrument.
 */
export const READING_RESOLUTION = 1e-6;

/**
 * Do these readings hold the characteristic's limits?
 *
 * Prints and ordinary characteristics: simple acceptance, on the limit is inside. Critical
 * characteristics of cut pieces: ISO 14253-1 with the whole of U as guard band: conforms inside the
 * limits shrunk by U, fails outside the limits grown by U, undecided between; undecided too when U
 * is unknown and the reading is inside the limits.
 *
 * @param readings numbers in the characteristic's unit, or answers for a yes/no characteristic; one a place
 * @returns verdict over all places: one that fails, fails all; else one undecided leaves all undecided;
 *   else a missing place or missing limits leave it incomplete
 * @throws RangeError for readings that are not finite, or of the wrong kind; for U below zero
 */
export function judge(
  characteristic: JudgedCharacteristic,
  readings: readonly (number | boolean)[],
  { uncertainty, stage }: JudgingConditions,
): Judgement {
  if (uncertainty !== null && !(uncertainty >= 0 && Number.isFinite(uncertainty))) {
    throw new RangeError("the uncertainty must be zero or more");
  }
  const yesNo = characteristic.kind === "yes-no";
  const guarded = stage === "final" && characteristic.critical && !yesNo;
  const limits = yesNo ? null : limitsFor(characteristic, stage);
  const remarks: string[] = [];
  if (!yesNo && limits === null) remarks.push(stage === "print" ? "no print limits are stated" : "no final limits are stated");

  const places = readings.map((reading) => {
    if (yesNo) {
      if (typeof reading !== "boolean") throw new RangeError("a yes/no characteristic takes an answer, not a number");
      return { verdict: reading ? ("conforms" as const) : ("fails" as const), outBy: 0 };
    }
    if (typeof reading !== "number" || !Number.isFinite(reading)) throw new RangeError("a reading must be a finite number");
    if (limits === null) return { verdict: "undecided" as const, outBy: 0 };
    return { verdict: judgePlace(reading, limits, guarded ? uncertainty : 0), outBy: outBy(reading, limits) };
  });

  if (guarded && uncertainty === null) remarks.push("the instrument's uncertainty is not known, so a critical characteristic can't be accepted");
  const coarse = limits === null || uncertainty === null ? null : isCoarse(limits, uncertainty);
  if (coarse) remarks.push("the instrument is coarse for this tolerance: its uncertainty is above an eighth of it");

  const placesMissing = Math.max(0, characteristic.places - readings.length);
  return {
    verdict: overall(places, placesMissing, yesNo || limits !== null),
    rule: guarded ? "ISO 14253-1" : "simple acceptance",
    limits,
    places,
    outBy: places.reduce((most, place) => Math.max(most, place.outBy), 0),
    placesMissing,
    coarse,
    remarks,
  };
}

/** The limits a characteristic has at a stage, or null when a side that its kind needs is missing. */
export function limitsFor(characteristic: JudgedCharacteristic, stage: "print" | "final"): Limits | null {
  const stated = stage === "print" ? characteristic.printLimits : characteristic.finalLimits;
  if (stated === null) return null;
  switch (characteristic.kind) {
    case "limits":
      return stated.low !== null && stated.high !== null ? stated : null;
    case "min":
      return stated.low !== null ? { low: stated.low, high: null } : null;
    case "max":
      return stated.high !== null ? { low: null, high: stated.high } : null;
    case "yes-no":
      return null;
  }
}

function judgePlace(reading: number, { low, high }: Limits, guard: number | null): PlaceVerdict {
  // An unknown uncertainty could be any: nothing is surely inside or surely outside.
  if (guard === null) return "undecided";
  const above = (limit: number) => reading >= limit - READING_RESOLUTION;
  const below = (limit: number) => reading <= limit + READING_RESOLUTION;
  if ((low === null || above(low + guard)) && (high === null || below(high - guard))) return "conforms";
  const outside = (low !== null && !above(low - guard)) || (high !== null && !below(high + guard));
  return outside ? "fails" : "undecided";
}

function outBy(reading: number, { low, high }: Limits): number {
  const beyond = Math.max(low === null ? 0 : low - reading, high === null ? 0 : reading - high, 0);
  return beyond > READING_RESOLUTION ? beyond : 0;
}

// 4:1 between the half tolerance and U; a one-sided limit has no total tolerance to compare with.
function isCoarse({ low, high }: Limits, uncertainty: number): boolean | null {
  if (low === null || high === null) return null;
  return uncertainty > (high - low) / 8 + READING_RESOLUTION;
}

function overall(places: Judgement["places"], placesMissing: number, hasLimits: boolean): Verdict {
  if (places.some((place) => place.verdict === "fails")) return "fails";
  if (!hasLimits) return "incomplete";
  if (places.some((place) => place.verdict === "undecided")) return "undecided";
  return placesMissing > 0 || places.length === 0 ? "incomplete" : "conforms";
}
