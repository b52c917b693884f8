import { GateMark } from "#app/components/gate-marks.tsx";
import { Section } from "#app/components/sheet.tsx";
import type { CalculationResult } from "#app/engineering/calculation.ts";

const figure = (value: number) => (Number.isFinite(value) ? Number(value.toPrecision(5)).toLocaleString("en", { maximumFractionDigits: 6 }) : "none");

/** The verdict as a sentence with the room left, every step with its formula, remarks, sources. */
export function CalculationResultView({ result }: { result: CalculationResult }) {
  const { verdict, room, steps, remarks, sources } = result;
  const left = room ? `${figure(Math.abs(room.value))} ${room.unit}` : null;
  const sentence = verdict === "pass" ? `Passes${left ? `, ${left} left` : ""}` : verdict === "fail" ? `Fails${left ? ` by ${left}` : ""}` : "Information only: no limit was given";
  return (
    <div>
      <p className="mb-4 text-sentence font-semibold">
        {verdict !== "information" && <GateMark state={verdict === "pass" ? "met" : "failed"} word="" large />} {sentence}
      </p>
      <div className="overflow-x-auto">
        <table className="w-full text-left">
          <caption className="sr-only">Steps</caption>
          <thead className="font-label text-label text-soft">
            <tr className="border-b border-rule">
              <th scope="col" className="py-1 pr-4 font-medium">Step</th>
              <th scope="col" className="py-1 pr-4 text-right font-medium">Value</th>
              <th scope="col" className="py-1 font-medium">Formula</th>
            </tr>
          </thead>
          <tbody>
            {steps.map(({ name, value, unit, formula }) => (
              <tr key={name} className="border-b border-hairline">
                <th scope="row" className="py-2 pr-4 font-normal first-letter:uppercase">{name}</th>
                <td className="py-2 pr-4 text-right whitespace-nowrap">{figure(value)} {unit}</td>
                <td className="py-2 text-soft">{formula}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {remarks.length > 0 && (
        <Section title="Remarks">
          <ul className="list-disc pl-5">{remarks.map((text) => <li key={text}>{text}</li>)}</ul>
        </Section>
      )}
      <Section title="Sources">
        <ul className="list-disc pl-5 text-soft">{sources.map((text) => <li key={text}>{text}</li>)}</ul>
      </Section>
      {result.cautions.length > 0 && (
        <Section title="Cautions">
          <ul className="list-disc pl-5">{result.cautions.map((text) => <li key={text}>{text}</li>)}</ul>
        </Section>
      )}
    </div>
  );
}
