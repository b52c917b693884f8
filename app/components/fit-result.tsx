import { GateMark } from "#app/components/gate-marks.tsx";
import { LimitsScale } from "#app/components/limits-scale.tsx";
import { Length, useUnits } from "#app/components/measure.tsx";
import { placeWords, printLimitsText, verdictWords, type FitMark, type TriedCharacteristic } from "#app/domain/fit.ts";
import type { Judgement } from "#app/domain/verdict.ts";

export interface FitResultView {
  characteristic: TriedCharacteristic & { question: string; method: string };
  readingsMm: number[];
  answers: boolean[];
  judgement: Judgement;
  /** "Bore gauge, ± 0.01 mm, unverified"; null when none was named. */
  instrument: { name: string; uncertaintyMm: number | null; trust: string | null } | null;
  bandPositionMm: number | null;
  bandWidthMm: number | null;
}

const trusted: Record<string, string> = { calibrated: "calibrated", checked: "checked before use", unverified: "unverified" };

/** What was found of one characteristic: verdict, each reading drawn against its limits, with what it was read. */
export function FitResult({ result }: { result: FitResultView }) {
  const units = useUnits();
  const { characteristic, readingsMm, answers, judgement } = result;
  const verdict = verdictWords(characteristic, judgement, units);
  const limits = printLimitsText(characteristic, units);
  const digits = finest([...readingsMm, judgement.limits?.low, judgement.limits?.high]);
  return (
    <section className="border-b border-hairline py-4 first:border-t">
      <div className="flex flex-wrap items-baseline justify-between gap-x-6">
        <h2 className="text-lg">{characteristic.name}</h2>
        <GateMark state={verdict.mark} word={verdict.words} />
      </div>
      <p className="text-soft">{[characteristic.question, limits, characteristic.method].filter(Boolean).join(", ")}</p>
      {characteristic.kind === "yes-no" ? (
        answers.length > 1 && <ol className="mt-1 flex flex-wrap gap-x-6">
          {answers.map((answer, index) => (
            <li key={index}>
              <span className="text-soft">Place {index + 1} </span>
              <GateMark state={answer ? "met" : "failed"} word={answer ? "yes" : "no"} />
            </li>
          ))}
        </ol>
      ) : (
        <ol className="mt-2 grid gap-x-8 gap-y-3 sm:grid-cols-2 xl:grid-cols-3">
          {readingsMm.map((mm, index) => (
            <Reading key={index} characteristic={characteristic} mm={mm} digits={digits} place={readingsMm.length > 1 ? index + 1 : null} judgement={judgement} />
          ))}
        </ol>
      )}
      <p className="mt-1 text-soft">
        {result.instrument && (
          <>
            {result.instrument.name}
            {result.instrument.uncertaintyMm !== null && (
              <>
                , ± <Length mm={result.instrument.uncertaintyMm} />
              </>
            )}
            {result.instrument.trust && `, ${trusted[result.instrument.trust]}`}
          </>
        )}
        {!result.instrument && readingsMm.length > 0 && "No instrument was named"}
        {judgement.coarse && <span className="text-attention">{result.instrument ? "; " : ""}it is coarse for this tolerance</span>}
      </p>
      {(result.bandWidthMm !== null || result.bandPositionMm !== null) && (
        <p className="text-soft">
          Witness mark
          {result.bandWidthMm !== null && (
            <>
              {" "}
              <Length mm={result.bandWidthMm} /> wide
            </>
          )}
          {result.bandPositionMm !== null && (
            <>
              , from <Length mm={result.bandPositionMm} /> on
            </>
          )}
        </p>
      )}
    </section>
  );
}

/** Decimals of the finest of these, so that what is compared is written alike and nothing is rounded away. */
function finest(values: Array<number | null | undefined>): number {
  return Math.max(...values.map((value) => String(Number((value ?? 0).toFixed(6))).split(".")[1]?.length ?? 0));
}

function Reading({ characteristic, mm, digits, place, judgement }: { characteristic: TriedCharacteristic; mm: number; digits: number; place: number | null; judgement: Judgement }) {
  const units = useUnits();
  const { mark, words }: { mark: FitMark; words: string } = placeWords(characteristic, mm, units);
  return (
    <li>
      <p className="flex flex-wrap items-baseline justify-between gap-x-4">
        <span>
          {place !== null && <span className="text-soft">Place {place} </span>}
          <b className="text-xl">
            <Length mm={mm} digits={digits} />
          </b>
        </span>
        <span className={mark === "failed" ? "font-semibold text-failed" : "text-soft"}>{words}</span>
      </p>
      <LimitsScale lower={judgement.limits?.low} upper={judgement.limits?.high} readings={[mm]} state={mark} />
    </li>
  );
}
