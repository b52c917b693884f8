import type { ReactNode } from "react";
import { Area, Length, Mass, Num, useUnits, Volume } from "#app/components/measure.tsx";
import { lengthIn, numberText } from "#app/components/measure-text.ts";
import type { ModelFacts } from "#app/domain/model-facts.ts";

export interface ModelFactsTableProps {
  facts: ModelFacts;
  /** The revision it came from, when that was measured too. */
  parent: { ordinal: number; facts: ModelFacts | null } | null;
  /** Why there is no mass. */
  noMass: string;
}

interface Row {
  label: string;
  value: ReactNode;
  change: ReactNode;
}

/** Smaller differences are not shown: they are not there at the decimals of the value. */
const difference = (now: number | null, before: number | null | undefined, atLeast: number) =>
  now === null || before == null || Math.abs(now - before) < atLeast ? null : now - before;

/** What the part weighs and measures, and what of it changed against the revision it came from. */
export function ModelFactsTable({ facts, parent, noMass }: ModelFactsTableProps) {
  const units = useUnits();
  const before = parent?.facts ?? null;
  const rows: Row[] = [];
  const length = (label: string, now: number | null, was: number | null | undefined) => {
    if (now === null) return;
    const change = difference(now, was, 0.005);
    rows.push({ label, value: <Length mm={now} digits={2} />, change: change !== null && <Length mm={change} digits={2} signed bare /> });
  };
  const massChange = difference(facts.massKg, before?.massKg, 5e-5);
  rows.push({ label: "Mass", value: facts.massKg === null ? noMass : <Mass kg={facts.massKg} />, change: massChange !== null && <Mass kg={massChange} signed /> });
  if (facts.sizeMm) {
    const [x, y, z] = facts.sizeMm;
    rows.push({
      label: "Size",
      value: (
        <>
          <Length mm={x} digits={1} bare /> × <Length mm={y} digits={1} bare /> × <Length mm={z} digits={1} />
        </>
      ),
      change: sizeChange(facts.sizeMm, before?.sizeMm ?? null, units),
    });
  }
  if (facts.volumeMm3 !== null) {
    const change = difference(facts.volumeMm3, before?.volumeMm3, facts.volumeMm3 * 5e-5);
    rows.push({ label: "Volume", value: <Volume mm3={facts.volumeMm3} />, change: change !== null && <Num value={(100 * change) / before!.volumeMm3!} digits={2} signed unit="%" /> });
  }
  if (facts.areaMm2 !== null) {
    const change = difference(facts.areaMm2, before?.areaMm2, facts.areaMm2 * 5e-5);
    rows.push({ label: "Surface", value: <Area mm2={facts.areaMm2} />, change: change !== null && <Num value={(100 * change) / before!.areaMm2!} digits={2} signed unit="%" /> });
  }
  length("Thinnest wall", facts.thinnestWallMm, before?.thinnestWallMm);
  length("Smallest inside radius", facts.smallestInsideRadiusMm, before?.smallestInsideRadiusMm);
  return (
    <table className="w-full text-left">
      <caption className="sr-only">Measures{before ? `, and what changed against revision ${parent!.ordinal}` : ""}</caption>
      <thead>
        <tr className="border-b border-rule">
          <th scope="col" colSpan={2} className="py-2 font-label text-label font-medium text-soft">
            {before ? `Against ${parent!.ordinal}` : "Measured"}
          </th>
          <th scope="col" className="py-2 text-right font-label text-label font-medium text-soft">
            <span className="sr-only">Change</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {rows.map(({ label, value, change }) => (
          <tr key={label} className="border-b border-hairline last:border-b-0">
            <th scope="row" className="py-2 pr-4 align-baseline font-normal">
              {label}
            </th>
            <td className="whitespace-nowrap py-2 pr-3 align-baseline">{value}</td>
            <td className="whitespace-nowrap py-2 text-right align-baseline font-semibold text-attention">{change || null}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}

/** "x +2.0" and "z −0.5" below it: only the directions that changed. */
function sizeChange(now: ModelFacts["sizeMm"], before: ModelFacts["sizeMm"], units: "mm" | "in"): ReactNode {
  if (!now || !before) return null;
  const changed = (["x", "y", "z"] as const).flatMap((axis, i) => {
    const change = difference(now[i]!, before[i]!, 0.005);
    return change === null ? [] : [`${axis} ${numberText(lengthIn(change, units), units === "mm" ? 2 : 4, true)}`];
  });
  return changed.length === 0 ? null : changed.map((one) => <span key={one} className="block">{one}</span>);
}
