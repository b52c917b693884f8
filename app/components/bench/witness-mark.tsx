import { useState } from "react";
import { readingMm, type DraftEntry, type Keyed } from "#app/domain/fit-draft.ts";
import type { LengthUnit } from "#app/units.ts";

type Band = Pick<DraftEntry, "bandPosition" | "bandWidth">;

/** Where grease or bluing was wiped off: the band of contact, by where it begins and how wide it is. */
export function WitnessMark({ entry, unit, onChange }: { entry: Band; unit: LengthUnit; onChange: (band: Partial<Band>) => void }) {
  const said = [entry.bandWidth && `${entry.bandWidth.text} ${entry.bandWidth.unit} wide`, entry.bandPosition && `from ${entry.bandPosition.text} ${entry.bandPosition.unit}`].filter(Boolean).join(", ");
  return (
    <details className="group">
      <summary className="flex min-h-11 items-center justify-between gap-3 text-soft">
        <span>{said ? `Witness mark ${said}` : "No witness mark is noted"}</span>
        <span className="word px-2 group-open:hidden">{said ? "Change" : "Note it"}</span>
        <span className="word hidden px-2 group-open:inline">Done</span>
      </summary>
      <div className="grid grid-cols-2 pb-2 pr-px">
        <BandField label="Begins at" value={entry.bandPosition} unit={unit} onChange={(bandPosition) => onChange({ bandPosition })} />
        <BandField label="Width" value={entry.bandWidth} unit={unit} onChange={(bandWidth) => onChange({ bandWidth })} />
      </div>
    </details>
  );
}

function BandField({ label, value, unit, onChange }: { label: string; value: Keyed | null; unit: LengthUnit; onChange: (value: Keyed | null) => void }) {
  const [text, setText] = useState(value?.text ?? "");
  // What was noted keeps its unit, whatever unit is read in by now.
  const shownUnit = value?.unit ?? unit;
  const read = text.trim() === "" ? null : readingMm({ text, unit: shownUnit });
  return (
    <label className="entry">
      <span className="block font-label text-label font-medium text-soft">{label}</span>
      <span className="flex items-baseline gap-2">
        <input
          value={text}
          inputMode="decimal"
          autoComplete="off"
          maxLength={20}
          aria-invalid={(read !== null && !read.ok) || undefined}
          className="entry-value scroll-mb-96"
          onChange={(event) => {
            const typed = event.target.value;
            setText(typed);
            const now = typed.trim() === "" ? null : readingMm({ text: typed, unit: shownUnit });
            if (now === null) onChange(null);
            else if (now.ok) onChange({ text: typed.trim(), unit: shownUnit });
          }}
        />
        <span className="text-soft">{shownUnit}</span>
      </span>
      {read !== null && !read.ok && <span className="block text-sm font-medium text-failed">{read.reason}</span>}
    </label>
  );
}
