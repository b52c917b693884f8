import type { FoundOnPrint, TriedCharacteristic } from "#app/domain/fit.ts";
import { parseLength, type LengthUnit } from "#app/units.ts";

/** A length as it was keyed in: the text and its unit, so that nothing is lost on the way. */
export interface Keyed {
  text: string;
  unit: LengthUnit;
}

/** What was found of one characteristic, as it stands on the phone. */
export interface DraftEntry {
  /** One a place; null where a place was left out. */
  readings: Array<Keyed | null>;
  answers: Array<boolean | null>;
  instrumentId: string | null;
  bandPosition: Keyed | null;
  bandWidth: Keyed | null;
}

/** A fit check as it is kept on the phone until it is sent. */
export interface FitDraft {
  version: 1;
  /** Made on the phone: the same draft sent twice is stored once. */
  draftKey: string;
  printId: string;
  /** What is tried, for who finds the draft elsewhere: "Filler flange, print 4.1". */
  label: string;
  matingPartId: string | null;
  unit: LengthUnit;
  instrumentId: string | null;
  /** -1: picking the mating part; up to the count of characteristics, which is the end. */
  at: number;
  entries: Record<string, DraftEntry>;
  cause: "design" | "print" | "misread" | null;
  remarks: string;
  /** Given out of hand: nothing of it changes any more, it is only sent. */
  finished: boolean;
  /** When it was given out of hand, by the phone's clock. */
  triedAt: string | null;
  /** How often it was sent without an answer; the server may have it. */
  attempts: number;
  /** The stored fit check, once the server answered; photos then follow. */
  fitCheckId: string | null;
}

export const newDraft = (draftKey: string, printId: string, label: string, unit: LengthUnit): FitDraft => ({
  version: 1, draftKey, printId, label, matingPartId: null, unit, instrumentId: null, at: -1, entries: {}, cause: null, remarks: "", finished: false, triedAt: null, attempts: 0, fitCheckId: null,
});

export const emptyEntry: DraftEntry = { readings: [], answers: [], instrumentId: null, bandPosition: null, bandWidth: null };

/** Longer than this is no part of a one-off shop's bench; a slipped point shows. */
export const LONGEST_READING_MM = 10_000;

/** A keyed reading in mm, or why it is none. A bare zero or a length below it is a reading too (a gap, an offset). */
export function readingMm({ text, unit }: Keyed): { ok: true; mm: number } | { ok: false; reason: string } {
  const parsed = parseLength(text, unit);
  if (!parsed.ok) return parsed;
  if (Math.abs(parsed.mm) > LONGEST_READING_MM) return { ok: false, reason: "This reading is longer than ten metres. Look at the point and the unit." };
  return parsed;
}

/** What of an entry can be judged now; places left out are not there. */
export function foundOf(entry: DraftEntry | undefined, uncertaintyMm: number | null = null): FoundOnPrint {
  const readingsMm = (entry?.readings ?? []).flatMap((reading) => {
    const read = reading === null ? null : readingMm(reading);
    return read?.ok ? [read.mm] : [];
  });
  return { readingsMm, answers: (entry?.answers ?? []).filter((answer) => answer !== null), uncertaintyMm };
}

/** The next place without a reading or answer, or null when all are there. */
export function nextPlace(characteristic: Pick<TriedCharacteristic, "kind" | "places">, entry: DraftEntry | undefined): number | null {
  const given: ReadonlyArray<unknown> = (characteristic.kind === "yes-no" ? entry?.answers : entry?.readings) ?? [];
  for (let place = 0; place < characteristic.places; place++) if (given[place] === undefined || given[place] === null) return place;
  return null;
}

/** Puts a value at a place, with null at places before it that were left out. */
export function putAt<T>(list: ReadonlyArray<T | null>, place: number, value: T): Array<T | null> {
  const put: Array<T | null> = Array.from({ length: Math.max(list.length, place + 1) }, (_, index) => list[index] ?? null);
  put[place] = value;
  return put;
}

/** What the phone sends. */
export interface FitSubmission {
  draftKey: string;
  printId: string;
  matingPartId: string;
  results: Array<{ characteristicId: string; readings: Keyed[]; answers: boolean[]; instrumentId: string | null; bandPosition: Keyed | null; bandWidth: Keyed | null }>;
  cause: FitDraft["cause"];
  remarks: string;
  triedAt: string;
}

/** The draft as it is sent: characteristics of which nothing was found are left out. */
export function submissionOf(draft: FitDraft & { matingPartId: string; triedAt: string }): FitSubmission {
  return {
    draftKey: draft.draftKey,
    printId: draft.printId,
    matingPartId: draft.matingPartId,
    results: Object.entries(draft.entries).flatMap(([characteristicId, entry]) => {
      const readings = entry.readings.filter((reading) => reading !== null);
      const answers = entry.answers.filter((answer) => answer !== null);
      if (readings.length + answers.length === 0) return [];
      return [{ characteristicId, readings, answers, instrumentId: readings.length > 0 ? entry.instrumentId : null, bandPosition: entry.bandPosition, bandWidth: entry.bandWidth }];
    }),
    cause: draft.cause,
    remarks: draft.remarks,
    triedAt: draft.triedAt,
  };
}
