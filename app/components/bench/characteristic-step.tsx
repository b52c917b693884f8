import { useId, useState, type FormEvent } from "react";
import { placeName, placesText, sayDay, withEntry, type BenchCharacteristic, type BenchInstrument, type ChangeDraft } from "#app/components/bench/bench-types.ts";
import { openCamera, PhotoStrip } from "#app/components/bench/photo-strip.tsx";
import type { BenchPhotos } from "#app/components/bench/use-bench-photos.ts";
import { WitnessMark } from "#app/components/bench/witness-mark.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";
import { Keypad } from "#app/components/keypad.tsx";
import { LimitsScale } from "#app/components/limits-scale.tsx";
import { numberText } from "#app/components/measure-text.ts";
import { emptyEntry, foundOf, nextPlace, putAt, readingMm, type DraftEntry, type FitDraft, type Keyed } from "#app/domain/fit-draft.ts";
import { judgedOf, judgeOnPrint, placeWords, printLimitsText, trustWords } from "#app/domain/fit.ts";
import { limitsFor } from "#app/domain/verdict.ts";
import { fromMm, type LengthUnit } from "#app/units.ts";

export interface CharacteristicStepProps {
  characteristic: BenchCharacteristic;
  draft: FitDraft;
  change: ChangeDraft;
  instrument: BenchInstrument | null;
  hasInstruments: boolean;
  today: string;
  photos: BenchPhotos;
  onPickInstrument: () => void;
  onNext: () => void;
  onBack: () => void;
  /** The last before the end. */
  last: boolean;
  say: (text: string) => void;
}

/** One characteristic at the bench: read or answered at each of its places, judged at once. */
export function CharacteristicStep(props: CharacteristicStepProps) {
  const { characteristic, draft } = props;
  const entry = draft.entries[characteristic.id] ?? emptyEntry;
  return (
    <>
      <h1 className="mt-4 text-sentence">{characteristic.name}</h1>
      <p className="text-soft">{howText(characteristic)}</p>
      {characteristic.kind === "yes-no" ? <Answering {...props} entry={entry} /> : <Reading {...props} entry={entry} />}
    </>
  );
}

function howText({ kind, method, places, photoRequired }: BenchCharacteristic): string {
  const where = places > 1 ? `at ${placesText(places)}, ${kind === "yes-no" ? "yes at every one" : "every one inside"}` : "";
  return [method, where, photoRequired ? "with a photo" : ""].filter(Boolean).join(", ") || "at one place";
}

type WithEntry = CharacteristicStepProps & { entry: DraftEntry };

function Reading({ characteristic, draft, change, entry, instrument, hasInstruments, today, photos, onPickInstrument, onNext, onBack, last, say }: WithEntry) {
  const [place, setPlace] = useState(() => nextPlace(characteristic, entry) ?? characteristic.places - 1);
  const there = entry.readings[place] ?? null;
  const [typed, setTyped] = useState(there?.text ?? "");
  const [fault, setFault] = useState<string | null>(null);
  const unit = draft.unit;
  const camera = useId();
  const limits = limitsFor(judgedOf(characteristic), "print");
  const now = typed.trim() === "" ? null : readingMm({ text: typed, unit });
  const before = entry.readings.flatMap((reading, index) => (index === place || reading === null ? [] : [readMm(reading)]));
  const words = now?.ok ? placeWords(characteristic, now.mm, unit) : null;
  const coarse = instrument && judgeOnPrint(characteristic, { readingsMm: [], answers: [], uncertaintyMm: instrument.uncertaintyMm }).coarse;

  const go = (to: number, readings: DraftEntry["readings"]) => {
    setPlace(to);
    const reading = readings[to] ?? null;
    setTyped(reading?.text ?? "");
    // What was keyed in inches is changed in inches.
    if (reading && reading.unit !== unit) change((one) => ({ ...one, unit: reading.unit }));
    setFault(null);
  };
  const save = (event: FormEvent) => {
    event.preventDefault();
    if (now === null) {
      if (nextPlace(characteristic, entry) === null) return onNext();
      return setFault("Key in the reading, or skip it.");
    }
    if (!now.ok) return setFault(now.reason);
    const readings = putAt(entry.readings, place, { text: typed.trim(), unit });
    const after = { ...entry, readings, instrumentId: instrument?.id ?? null };
    change((one) => withEntry(one, characteristic.id, () => after, emptyEntry));
    say(`${characteristic.name}, ${placeName(place)} ${typed} ${unit}, ${words!.words}`);
    const next = nextPlace(characteristic, after);
    if (next === null) onNext();
    else go(next, readings);
  };

  const pickUnit = (to: LengthUnit) => change((one) => ({ ...one, unit: to }));
  return (
    <form onSubmit={save} noValidate className="flex flex-1 flex-col">
      <div className="mt-2">
        {limits ? (
          <LimitsScale lower={limits.low} upper={limits.high} readings={now?.ok ? [...before, now.mm] : before} state={words?.mark ?? "open"} />
        ) : (
          <p className="border-y border-hairline py-3 text-soft">No print limits are stated for it. The reading is kept, and judged when they are.</p>
        )}
      </div>
      <div className="mt-1 flex min-h-11 flex-wrap items-center gap-x-4 font-medium">
        {Array.from({ length: characteristic.places }, (_, index) => index).map((index) =>
          index === place ? (
            characteristic.places > 1 && (
              <span key={index} aria-hidden="true">
                {placeName(index)}:
              </span>
            )
          ) : entry.readings[index] ? (
            <button key={index} type="button" className="-mx-1 flex min-h-11 min-w-11 items-center px-1 underline decoration-hairline underline-offset-4" aria-label={`Change the ${placeName(index)} reading, ${entry.readings[index].text} ${entry.readings[index].unit}`} onClick={() => go(index, entry.readings)}>
              {shownIn(entry.readings[index], unit)}
            </button>
          ) : null,
        )}
      </div>
      <div className="flex items-end justify-between gap-3 border-b-[1.5px] border-ink pb-1">
        <label className="flex min-w-0 flex-1 items-baseline gap-2">
          <span className="sr-only">
            {characteristic.name}, {placeName(place)} reading in {unit}
          </span>
          <input
            value={typed}
            onChange={(event) => {
              setTyped(event.target.value);
              setFault(null);
            }}
            // The keys below write into it; a keyboard works too.
            inputMode="none"
            autoComplete="off"
            enterKeyHint="next"
            maxLength={20}
            aria-invalid={fault !== null || undefined}
            className="w-full min-w-0 bg-transparent text-reading font-semibold focus:outline-none"
          />
          <span className="shrink-0 text-soft">{unit}</span>
        </label>
        <span className="shrink-0 pb-1.5">{words && <GateMark state={words.mark} word={words.words} />}</span>
      </div>
      {fault && (
        <p role="alert" className="font-medium text-failed">
          {fault}
        </p>
      )}
      <p className="flex items-center justify-between gap-4 text-soft">
        <span>
          {instrument ? `${instrument.name}, ${trustWords(instrument, unit, today, sayDay)}` : "No instrument is named"}
          {coarse && <span className="text-attention">; coarse for this tolerance</span>}
        </span>
        {hasInstruments && (
          <button type="button" className="word min-h-11 shrink-0 px-2" onClick={onPickInstrument}>
            {instrument ? "Change" : "Pick"}
          </button>
        )}
      </p>
      <WitnessMark entry={entry} unit={unit} onChange={(band) => change((one) => withEntry(one, characteristic.id, (was) => ({ ...was, ...band }), emptyEntry))} />
      <PhotoStrip bench={photos} characteristicId={characteristic.id} inputId={camera} />
      <div className="sticky bottom-0 mt-auto bg-sheet pb-3.5 pt-1">
        <StepMoves onBack={onBack} onSkip={onNext} limits={printLimitsText(characteristic, unit)} />
        <Keypad
          value={typed}
          onChange={(value) => {
            setTyped(value);
            setFault(null);
          }}
          unit={unit}
          onUnitChange={pickUnit}
          onPhoto={() => openCamera(camera)}
          photoText={countText(photos, characteristic.id)}
          saveText={last && place === characteristic.places - 1 ? "Save, end" : "Save, next"}
        />
      </div>
    </form>
  );
}

const countText = (photos: BenchPhotos, id: string) => {
  const count = photos.photos.filter(({ characteristicId }) => characteristicId === id).length;
  return count === 0 ? "Photo" : `Photo (${count})`;
};

function readMm(keyed: Keyed): number {
  const read = readingMm(keyed);
  if (!read.ok) throw new RangeError(read.reason);
  return read.mm;
}

/** As keyed, or turned into the unit that is shown. */
function shownIn(keyed: Keyed, unit: LengthUnit): string {
  return keyed.unit === unit ? keyed.text : numberText(fromMm(readMm(keyed), unit), unit === "mm" ? 3 : 5);
}

function StepMoves({ onBack, onSkip, limits }: { onBack: () => void; onSkip: () => void; limits?: string | null }) {
  return (
    <div className="flex items-center justify-between gap-3">
      <button type="button" className="word min-h-11 min-w-16 px-1 text-left" onClick={onBack}>
        Back
      </button>
      {limits && <span className="truncate text-sm text-soft">{limits}</span>}
      <button type="button" className="word min-h-11 min-w-16 px-1 text-right" onClick={onSkip}>
        Skip
      </button>
    </div>
  );
}

function Answering({ characteristic, draft, change, entry, photos, onNext, onBack, last, say }: WithEntry) {
  const [place, setPlace] = useState(() => nextPlace(characteristic, entry) ?? characteristic.places - 1);
  const camera = useId();
  const answer = entry.answers[place] ?? null;
  const complete = nextPlace(characteristic, entry) === null;
  const judgement = judgeOnPrint(characteristic, foundOf(entry));
  const give = (value: boolean) => {
    const after = { ...entry, answers: putAt(entry.answers, place, value) };
    change((one) => withEntry(one, characteristic.id, () => after, emptyEntry));
    say(`${characteristic.name}${characteristic.places > 1 ? `, ${placeName(place)}` : ""}: ${placeWords(characteristic, value, draft.unit).words}`);
    const next = nextPlace(characteristic, after);
    if (next !== null) setPlace(next);
  };
  const key = "min-h-20 border border-ink text-2xl font-semibold active:bg-band aria-pressed:border-2";
  return (
    <div className="flex flex-1 flex-col">
      <p className="mt-5 text-xl font-medium">{characteristic.question}</p>
      {characteristic.places > 1 && (
        <ol aria-label="Places" className="mt-2 flex flex-wrap gap-x-2">
          {Array.from({ length: characteristic.places }, (_, index) => (
            <li key={index}>
              <button type="button" aria-current={index === place || undefined} onClick={() => setPlace(index)} className="min-h-11 min-w-11 border-b-2 border-transparent px-2 aria-[current]:border-blue aria-[current]:font-semibold">
                {index + 1} {entry.answers[index] === true ? "yes" : entry.answers[index] === false ? "no" : "–"}
              </button>
            </li>
          ))}
        </ol>
      )}
      <p className="mt-3 min-h-8">{complete && <GateMark large state={judgement.verdict === "fails" ? "failed" : "met"} word={judgement.verdict === "fails" ? "it fails" : "it fits"} />}</p>
      <WitnessMark entry={entry} unit={draft.unit} onChange={(band) => change((one) => withEntry(one, characteristic.id, (was) => ({ ...was, ...band }), emptyEntry))} />
      <PhotoStrip bench={photos} characteristicId={characteristic.id} inputId={camera} />
      <div className="sticky bottom-0 mt-auto bg-sheet pb-3.5 pt-1">
        <StepMoves onBack={onBack} onSkip={onNext} />
        <div className="grid grid-cols-2 gap-2">
          <button type="button" aria-pressed={answer === true} className={`${key} aria-pressed:border-met aria-pressed:bg-wash`} onClick={() => give(true)}>
            Yes
          </button>
          <button type="button" aria-pressed={answer === false} className={`${key} aria-pressed:border-failed aria-pressed:bg-failed-wash`} onClick={() => give(false)}>
            No
          </button>
          <button type="button" className="min-h-16 border border-ink font-semibold" onClick={() => openCamera(camera)}>
            {countText(photos, characteristic.id)}
          </button>
          <button type="button" className="min-h-16 border border-ink bg-ink font-semibold text-sheet disabled:border-dashed disabled:border-rule disabled:bg-transparent disabled:text-soft" disabled={!complete} onClick={onNext}>
            {last ? "To the end" : "Next"}
          </button>
        </div>
      </div>
    </div>
  );
}
