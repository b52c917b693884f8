import { useState, type FormEvent } from "react";
import { CheckField, LengthField, NumberField, RadioRow, SelectField, TextArea, TextField, type ChoiceOption } from "#app/components/fields.tsx";
import { FieldGroup, useEntryForm } from "#app/components/form.tsx";
import { Limits } from "#app/components/limits.tsx";
import { limitsOfClass } from "#app/engineering/limits-of-class.ts";
import { parseLength } from "#app/units.ts";

export const characteristicLabels = {
  name: "Characteristic",
  kind: "Checked by",
  nominalMm: "Nominal",
  fitClass: "Class",
  lowerMm: "Lower limit",
  upperMm: "Upper limit",
  printLowerMm: "Lower limit on the print",
  printUpperMm: "Upper limit on the print",
  question: "Question",
  method: "How it is measured",
  places: "Places",
  matingPartId: "Tried on",
  required: "Required at the gate",
  critical: "Critical",
  photoRequired: "With a photo",
  provableOnPrint: "A print can show it",
};

export interface CharacteristicEntry {
  name: string;
  kind: "limits" | "fit" | "min" | "max" | "yes-no";
  nominalMm: number | null;
  lowerMm: number | null;
  upperMm: number | null;
  fitClass: string | null;
  printLowerMm: number | null;
  printUpperMm: number | null;
  question: string;
  method: string;
  places: number;
  matingPartId: string | null;
  required: boolean;
  critical: boolean;
  photoRequired: boolean;
  provableOnPrint: boolean;
}

const kinds: ChoiceOption[] = [
  { value: "limits", label: "limits" },
  { value: "fit", label: "a fit class" },
  { value: "min", label: "a least value" },
  { value: "max", label: "a greatest value" },
  { value: "yes-no", label: "a yes/no question" },
];

// Which fields show follows from the ticked kind by CSS alone, so that it works without scripts.
const shownFor = {
  question: "hidden group-has-[[value=yes-no]:checked]/kind:contents",
  nominal: "hidden group-has-[[value=limits]:checked]/kind:contents group-has-[[value=fit]:checked]/kind:contents",
  fitClass: "hidden group-has-[[value=fit]:checked]/kind:contents",
  lower: "hidden group-has-[[value=limits]:checked]/kind:contents group-has-[[value=min]:checked]/kind:contents",
  upper: "hidden group-has-[[value=limits]:checked]/kind:contents group-has-[[value=max]:checked]/kind:contents",
  sizes: "group-has-[[value=yes-no]:checked]/kind:hidden",
  print: "hidden group-has-[[name=provableOnPrint]:checked]/kind:block group-has-[[value=yes-no]:checked]/kind:hidden!",
  printLower: "contents group-has-[[value=max]:checked]/kind:hidden",
  printUpper: "contents group-has-[[value=min]:checked]/kind:hidden",
};

/** What is checked, by which limits on the cut part and on the print, and how it counts. */
export function CharacteristicFields({ entry, matingParts }: { entry: CharacteristicEntry | null; matingParts: ChoiceOption[] }) {
  const labels = characteristicLabels;
  return (
    <div className="group/kind">
      <FieldGroup columns={2}>
        <TextField name="name" label={labels.name} defaultValue={entry?.name} placeholder="Pilot bore" wide />
        <RadioRow name="kind" label={labels.kind} options={kinds} defaultValue={entry?.kind ?? "limits"} wide />
        <div className={shownFor.question}>
          <TextArea name="question" label={labels.question} rows={2} defaultValue={entry?.question} placeholder="Drops on by hand?" hint="Asked so that yes is good." wide />
        </div>
      </FieldGroup>
      <div className={shownFor.sizes}>
        <FinalSizes entry={entry} />
      </div>
      <FieldGroup>
        <CheckField name="provableOnPrint" label={labels.provableOnPrint} defaultChecked={entry?.provableOnPrint ?? true} hint="Leave it empty for what only the cut part can show: surface, hardness, a thread's strength." />
      </FieldGroup>
      <div className={shownFor.print}>
        <FieldGroup legend="On the print" hint="Print limits are not metal limits: a print can't hold what metal can. State what a good print must hold, so that the fit is proven and a fair print is not refused." columns={2}>
          <div className={shownFor.printLower}>
            <LengthField name="printLowerMm" label={labels.printLowerMm} defaultMm={entry?.printLowerMm} />
          </div>
          <div className={shownFor.printUpper}>
            <LengthField name="printUpperMm" label={labels.printUpperMm} defaultMm={entry?.printUpperMm} />
          </div>
        </FieldGroup>
      </div>
      <FieldGroup legend="How" columns={2}>
        <TextField name="method" label={labels.method} optional defaultValue={entry?.method} suggestions={["caliper", "micrometer", "bore gauge", "gauge pin", "by hand", "by eye"]} />
        <NumberField name="places" label={labels.places} defaultValue={entry?.places ?? 1} hint="All of them must be inside." />
        <SelectField name="matingPartId" label={labels.matingPartId} optional prompt="whichever hardware the fit check names" defaultValue={entry?.matingPartId} options={matingParts} wide />
      </FieldGroup>
      <FieldGroup legend="How it counts" columns={3}>
        <CheckField name="required" label={labels.required} defaultChecked={entry?.required ?? true} hint="The part can't go without it." />
        <CheckField name="critical" label={labels.critical} defaultChecked={entry?.critical} hint="The cut part is judged with the instrument's uncertainty (ISO 14253-1)." />
        <CheckField name="photoRequired" label={labels.photoRequired} defaultChecked={entry?.photoRequired} hint="A result counts only with its photo." />
      </FieldGroup>
    </div>
  );
}

/** The sizes of the cut part; a class shows its limits as it is typed. */
function FinalSizes({ entry }: { entry: CharacteristicEntry | null }) {
  const labels = characteristicLabels;
  const { unit } = useEntryForm();
  const [found, setFound] = useState(() => (entry?.kind === "fit" ? limitsOfClass(entry.nominalMm ?? 0, entry.fitClass ?? "") : undefined));
  const look = ({ currentTarget }: FormEvent<HTMLElement>) => {
    const typed = (name: string) => currentTarget.querySelector<HTMLInputElement>(`[name=${name}]`)?.value ?? "";
    const nominal = parseLength(typed("nominalMm"), unit);
    setFound(nominal.ok ? limitsOfClass(nominal.mm, typed("fitClass")) : undefined);
  };
  return (
    <div onInput={look}>
      <FieldGroup legend="On the cut part" columns={3}>
        <div className={shownFor.nominal}>
          <LengthField name="nominalMm" label={labels.nominalMm} optional defaultMm={entry?.nominalMm} hint="A fit class needs it." />
        </div>
        <div className={shownFor.fitClass}>
          <TextField name="fitClass" label={labels.fitClass} defaultValue={entry?.fitClass} placeholder="H7" hint={found ? <>ISO 286: <Limits lower={found.lower_mm} upper={found.upper_mm} /></> : "A capital for a hole, a small letter for a shaft (ISO 286)."} />
        </div>
        <div className={shownFor.lower}>
          <LengthField name="lowerMm" label={labels.lowerMm} defaultMm={entry?.lowerMm} />
        </div>
        <div className={shownFor.upper}>
          <LengthField name="upperMm" label={labels.upperMm} defaultMm={entry?.upperMm} />
        </div>
      </FieldGroup>
    </div>
  );
}
