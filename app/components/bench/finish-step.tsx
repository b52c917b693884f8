import { useId } from "react";
import type { BenchCharacteristic, ChangeDraft } from "#app/components/bench/bench-types.ts";
import { openCamera, PhotoStrip } from "#app/components/bench/photo-strip.tsx";
import { PickRows } from "#app/components/bench/pick-rows.tsx";
import type { BenchPhotos } from "#app/components/bench/use-bench-photos.ts";
import { GateMark } from "#app/components/gate-marks.tsx";
import { foundOf, type FitDraft } from "#app/domain/fit-draft.ts";
import { fitSentence, judgeOnPrint, verdictWords } from "#app/domain/fit.ts";

export interface FinishStepProps {
  characteristics: BenchCharacteristic[];
  draft: FitDraft;
  change: ChangeDraft;
  photos: BenchPhotos;
  onGo: (at: number) => void;
  onBack: () => void;
  onRecord: () => void;
}

/** The end: all that was found, why it failed if it did, and the one button that gives it out of hand. */
export function FinishStep({ characteristics, draft, change, photos, onGo, onBack, onRecord }: FinishStepProps) {
  const camera = useId();
  const rows = characteristics.map((characteristic) => {
    const judgement = judgeOnPrint(characteristic, foundOf(draft.entries[characteristic.id]));
    return { characteristic, judgement, tried: judgement.places.length > 0 };
  });
  const tried = rows.filter((row) => row.tried);
  const { sentence, mark } = fitSentence(tried.map(({ judgement }) => judgement.verdict));
  const noPhoto = rows.filter(({ characteristic, tried: was }) => was && characteristic.photoRequired && !photos.photos.some(({ characteristicId }) => characteristicId === characteristic.id || characteristicId === null));
  return (
    <div className="flex flex-1 flex-col">
      <h1 className="mt-4 text-sentence">{sentence}</h1>
      {tried.length < rows.length && tried.length > 0 && <p className="text-soft">What was skipped can be tried in another fit check.</p>}
      <ul aria-label="What was found" className="mt-3 divide-y divide-hairline border-y border-hairline">
        {rows.map(({ characteristic, judgement, tried: was }, index) => {
          const words = verdictWords(characteristic, judgement, draft.unit);
          return (
            <li key={characteristic.id}>
              <button type="button" onClick={() => onGo(index)} className="flex min-h-12 w-full flex-wrap items-center justify-between gap-x-4 py-1.5 text-left active:bg-wash">
                <span className="font-medium">{characteristic.name}</span>
                {was ? <GateMark state={words.mark} word={words.words} /> : <span className="text-soft">skipped</span>}
              </button>
            </li>
          );
        })}
      </ul>
      {noPhoto.length > 0 && <p className="mt-2 text-attention">A photo is asked for: {noPhoto.map(({ characteristic }) => characteristic.name).join(", ")}. It can be added later too.</p>}
      {mark === "failed" && (
        <section className="mt-5">
          <h2 className="mb-2 text-lg">Why does it fail?</h2>
          <PickRows
            label="Cause"
            picked={draft.cause}
            onPick={(cause) => change((one) => ({ ...one, cause: cause as FitDraft["cause"] }))}
            rows={[
              { id: "design", label: "The design", detail: "It asks for the next revision" },
              { id: "print", label: "The print", detail: "It asks for a new print, not for a revision" },
              { id: "misread", label: "A wrong reading of the mating part", detail: "It asks for measuring again" },
              { id: null, label: "Not known yet", detail: "It can be named later" },
            ]}
          />
        </section>
      )}
      <label className="mt-5 block">
        <span className="font-label text-label font-medium text-soft">Remarks (may stay empty)</span>
        <textarea rows={3} maxLength={2000} value={draft.remarks} onChange={(event) => change((one) => ({ ...one, remarks: event.target.value }))} className="w-full border border-rule bg-transparent px-3 py-2" />
      </label>
      <PhotoStrip bench={photos} characteristicId={null} inputId={camera} />
      <div className="sticky bottom-0 mt-auto grid gap-2 bg-sheet pb-3.5 pt-3">
        <div className="grid grid-cols-2 gap-2">
          <button type="button" className="min-h-11 border border-ink font-semibold" onClick={onBack}>
            Back
          </button>
          <button type="button" className="min-h-11 border border-ink font-semibold" onClick={() => openCamera(camera)}>
            Photo of it all
          </button>
        </div>
        <button type="button" disabled={tried.length === 0 || photos.looking} onClick={onRecord} className="button button-primary button-bench w-full">
          Record the fit check
        </button>
        {tried.length === 0 && <p className="text-center text-soft">Nothing was tried yet.</p>}
      </div>
    </div>
  );
}
