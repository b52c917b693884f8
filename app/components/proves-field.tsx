import { fieldId, useEntryForm } from "#app/components/form.tsx";

/** Which characteristics a partial print can prove; sends `proves[]`. */
export function ProvesField({ characteristics }: { characteristics: Array<{ id: string; name: string }> }) {
  const form = useEntryForm();
  const kept = form.values?.["proves[]"]?.split(", ") ?? [];
  const faults = form.errors.proves ?? [];
  const first = fieldId(form.id, "proves");
  return (
    <fieldset className="entry col-span-full" aria-describedby={faults.length ? `${first}-fault` : undefined}>
      <legend className="float-left w-full font-label text-label font-medium text-soft">What it can prove</legend>
      <div className="clear-both grid gap-x-7 sm:grid-cols-2">
        {characteristics.map(({ id, name }, index) => (
          <label key={id} className="flex min-h-11 items-center gap-3">
            <input type="checkbox" name="proves[]" value={id} id={index === 0 ? first : undefined} defaultChecked={kept.includes(id)} aria-invalid={faults.length > 0 || undefined} className="tick" />
            <span className="font-medium">{name}</span>
          </label>
        ))}
      </div>
      {faults.length > 0 && (
        <p id={`${first}-fault`} className="text-sm font-medium text-failed">
          {faults.join(" ")}
        </p>
      )}
    </fieldset>
  );
}
