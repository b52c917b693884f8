import type { ReactNode } from "react";
import { RadioRow } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { Length, Volume } from "#app/components/measure.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";

export interface ModelFileView {
  id: string;
  name: string;
  kind: "step" | "stl";
  bytes: number;
  sha256: string;
  unit: "mm" | "in" | null;
  state: "waiting" | "running" | "done" | "failed";
  progress: number;
  step: string;
  /** Why it can't be read. */
  reason: string | null;
  measured: {
    sizeMm: readonly [number, number, number] | null;
    volumeMm3: number | null;
    unit: { source: string; assumed: boolean };
    warnings: string[];
    /** "one valid solid, 24 faces" */
    what: string;
  } | null;
}

export interface ModelFileProps {
  file: ModelFileView;
  /** Null when the revision was released. */
  change: { remove: ReactNode } | null;
}

/** What became of a model file: its measures, or what is being done, or why it can't be read. */
export function ModelFile({ file, change }: ModelFileProps) {
  const { name, state, measured } = file;
  const hidden = <input type="hidden" name="fileId" value={file.id} />;
  return (
    <div>
      <div className="flex flex-wrap items-baseline justify-between gap-x-6">
        <h3 className="text-base [overflow-wrap:anywhere]">
          {file.kind === "step" ? "STEP" : "STL"}, {name}
        </h3>
        <div className="flex flex-wrap items-baseline gap-x-6">
          <a href={`/files/${file.id}`} download className="word inline-flex min-h-11 items-center">
            Download
          </a>
          {change?.remove}
        </div>
      </div>
      <p className="text-sm text-soft">
        {bytesText(file.bytes)}, SHA-256 <span title={file.sha256}>{file.sha256.slice(0, 12)}…</span>
      </p>
      {(state === "waiting" || state === "running") && <ProgressLine label={state === "waiting" ? "Waiting to be measured" : "Measuring"} share={state === "waiting" ? null : file.progress} text={file.step || undefined} />}
      {state === "failed" && (
        <Notice
          kind="error"
          action={
            change && (
              <EntryForm intent="measure-again">
                {hidden}
                <SubmitButton weight="quiet">Measure again</SubmitButton>
              </EntryForm>
            )
          }
        >
          It can't be read: {file.reason} Upload a mended file in its place.
        </Notice>
      )}
      {measured && state === "done" && (
        <>
          <p className="mt-1">
            {measured.sizeMm && (
              <>
                <Length mm={measured.sizeMm[0]} digits={2} bare /> × <Length mm={measured.sizeMm[1]} digits={2} bare /> × <Length mm={measured.sizeMm[2]} digits={2} />,{" "}
              </>
            )}
            {measured.volumeMm3 !== null && (
              <>
                <Volume mm3={measured.volumeMm3} />,{" "}
              </>
            )}
            {measured.what}
          </p>
          <p className="text-soft">
            {file.kind === "step" ? `Its unit is ${measured.unit.source}${measured.unit.assumed ? ", assumed: the file states none" : ", as the file states"}.` : `Its numbers are taken as ${measured.unit.source === "in" ? "inches" : "millimetres"}${file.unit === null ? ", assumed: nobody has stated it" : ""}.`}
          </p>
          {measured.warnings.map((warning) => (
            <p key={warning} className="text-attention">
              {warning}
            </p>
          ))}
        </>
      )}
      {file.kind === "stl" && change && state !== "running" && (
        <details className="mt-1">
          <summary className="word inline-flex min-h-11 items-center">State its unit</summary>
          <EntryForm intent="state-unit" className="max-w-md">
            {hidden}
            <FieldGroup>
              <RadioRow name="unit" label="The numbers in the file are" defaultValue={file.unit ?? "mm"} options={[{ value: "mm", label: "millimetres" }, { value: "in", label: "inches" }]} />
            </FieldGroup>
            <SubmitButton weight="secondary" pendingText="Measuring again">
              Take it so, and measure again
            </SubmitButton>
          </EntryForm>
        </details>
      )}
    </div>
  );
}

export function bytesText(bytes: number): string {
  if (bytes < 1024) return `${bytes} bytes`;
  const mb = bytes / 1024 / 1024;
  return mb >= 1 ? `${mb.toFixed(1)} MB` : `${Math.ceil(bytes / 1024)} kB`;
}
