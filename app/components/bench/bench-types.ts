import { dayText } from "#app/components/day.tsx";
import type { DraftEntry, FitDraft } from "#app/domain/fit-draft.ts";
import type { TriedCharacteristic, TrustedInstrument } from "#app/domain/fit.ts";
import type { UploadLimits } from "#app/domain/uploads.ts";

export interface BenchCharacteristic extends TriedCharacteristic {
  id: string;
  matingPartId: string | null;
  question: string;
  method: string;
  photoRequired: boolean;
}

export interface BenchInstrument extends TrustedInstrument {
  id: string;
}

export interface BenchMatingPart {
  id: string;
  name: string;
  description: string;
}

/** All that the bench needs to work without a connection once the page is open. */
export interface BenchProps {
  /** Drafts on this phone are kept apart by it. */
  personKey: string;
  part: string;
  print: { id: string; name: string; words: string; spoiled: string | null };
  /** Name of the revision when it was released: nothing can be added then. */
  sealed: string | null;
  matingParts: BenchMatingPart[];
  /** Those this print can prove, in the order in which they are tried. */
  characteristics: BenchCharacteristic[];
  instruments: BenchInstrument[];
  limits: UploadLimits;
  /** yyyy-mm-dd */
  today: string;
}

/** What is tried on this mating part. */
export const triedOn = (characteristics: readonly BenchCharacteristic[], matingPartId: string | null) => characteristics.filter((one) => one.matingPartId === null || one.matingPartId === matingPartId);

export type ChangeDraft = (change: (draft: FitDraft) => FitDraft) => void;

export const withEntry = (draft: FitDraft, id: string, change: (entry: DraftEntry) => DraftEntry, empty: DraftEntry): FitDraft => ({ ...draft, entries: { ...draft.entries, [id]: change(draft.entries[id] ?? empty) } });

const placeNames = ["first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth", "ninth", "tenth"];
export const placeName = (place: number) => placeNames[place] ?? `place ${place + 1}`;
const countNames = ["", "one place", "two places", "three places", "four places", "five places", "six places", "seven places", "eight places", "nine places", "ten places"];
export const placesText = (places: number) => countNames[places] ?? `${places} places`;

export const sayDay = (day: string) => dayText({ at: day });
