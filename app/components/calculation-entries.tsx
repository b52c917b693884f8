import { CheckField, NumberField, SelectField, TextField } from "#app/components/fields.tsx";
import { FieldGroup } from "#app/components/form.tsx";
import type { Entry } from "#app/engineering/entries.ts";

/** The inputs of any calculation, with units and where a default comes from. */
export function CalculationEntries({ entries, values = {} }: { entries: Entry[]; values?: Record<string, string> }) {
  return (
    <FieldGroup>
      {entries.map(({ key, label, unit, kind, optional, default: fallback, hint, choices }) => {
        const common = { name: key, label, hint: hint || undefined, optional, defaultValue: values[key] ?? fallback };
        if (kind === "tick") return <CheckField key={key} name={key} label={label} defaultChecked={common.defaultValue === "true"} />;
        if (kind === "choice") return <SelectField key={key} {...common} prompt="not stated" options={choices.map((value) => ({ value, label: value }))} />;
        if (kind === "pair") return <TextField key={key} {...common} label={`${label}${unit ? `, ${unit}` : ""}`} placeholder="low to high" />;
        if (kind === "text") return <TextField key={key} {...common} suggestions={choices.length > 0 ? choices : undefined} />;
        return <NumberField key={key} {...common} unit={unit || undefined} />;
      })}
    </FieldGroup>
  );
}
