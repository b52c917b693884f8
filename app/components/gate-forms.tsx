import { Day } from "#app/components/day.tsx";
import { CheckField, DateField, NumberField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton, type FormFaults, type FormValues } from "#app/components/form.tsx";
import { Section } from "#app/components/sheet.tsx";

interface Refilled {
  errors?: FormFaults;
  values?: FormValues;
}

/** The designer's signature that the records are complete, or the way to take it back. */
export function ProposeForm({ proposal, mayPropose, proved }: { proposal: { by: string; at: Date; mine: boolean } | null; mayPropose: boolean; proved: boolean }) {
  if (!mayPropose) return null;
  if (proposal) {
    return (
      <Section title="At the gate">
        <p className="text-soft">
          {proposal.by}, <Day at={proposal.at} time />
        </p>
        <EntryForm intent="withdraw">
          <SubmitButton weight="quiet">Take it back from the gate</SubmitButton>
        </EntryForm>
      </Section>
    );
  }
  return (
    <Section title="Put it to the gate" lead="I put this revision to the gate: its records are complete as far as I know.">
      <EntryForm intent="propose">
        <SubmitButton weight="secondary" disabled={!proved} pendingText="Signing">
          Sign and put it to the gate
        </SubmitButton>
      </EntryForm>
    </Section>
  );
}

export interface DecisionFormsProps {
  verdict: "go" | "no-go";
  seen: { hash: string; records: string };
  proved: boolean;
  proposed: boolean;
  /** Whoever decides now also proposed, or nobody did. */
  alone: boolean;
  refusal: Refilled;
  go: Refilled;
}

/** The owner's decision on exactly what the page shows. */
export function DecisionForms({ verdict, seen, proved, proposed, alone, refusal, go }: DecisionFormsProps) {
  const ready = verdict === "go";
  return (
    <Section title="Decide" ruled>
      {ready ? (
        <p className="mb-3">
          {alone ? "I put this revision to the gate and decide, alone, that it may be cut from solid. The record will say “same person”." : "I decide that this revision may be cut from solid."} After this nothing that it rests on can change.
        </p>
      ) : (
        <p className="mb-3 text-soft">A go needs every line met or conceded. {proposed ? "" : "It was not put to the gate yet."}</p>
      )}
      <EntryForm intent="go" {...go}>
        <input type="hidden" name="hash" value={seen.hash} />
        <input type="hidden" name="records" value={seen.records} />
        <FieldGroup>
          <TextArea name="reason" label="Remark" optional rows={2} />
        </FieldGroup>
        <SubmitButton disabled={!ready || !proved} pendingText="Releasing" wide>
          Go: release to billet
        </SubmitButton>
      </EntryForm>
      <EntryForm intent="no-go" className="mt-6" {...refusal}>
        <FieldGroup>
          <TextArea name="reason" label="Why not" rows={2} />
        </FieldGroup>
        <SubmitButton weight="secondary" disabled={!proved} pendingText="Signing" wide>
          No-go
        </SubmitButton>
      </EntryForm>
    </Section>
  );
}

/** One reason and a limit for the lines that are not met. */
export function ConcessionForm({ lines, needsOutside, proved, errors, values }: Refilled & { lines: string[]; needsOutside: boolean; proved: boolean }) {
  return (
    <details className="mt-8 border-t-[1.5px] border-ink pt-4" open={errors !== undefined && Object.keys(errors).length > 0}>
      <summary className="min-h-11 text-lg font-semibold">Concede lines that are not met</summary>
      <p className="mb-4 max-w-prose text-soft">A concession is printed on the packet. An invalid model and unread cautions can’t be conceded.</p>
      <EntryForm intent="concede" errors={errors} values={values} labels={{ lines: "Lines", reason: "Reason", limitPieces: "Pieces", limitUntil: "Until" }}>
        <FieldGroup legend="Lines" columns={3}>
          {lines.map((line) => (
            <CheckField key={line} name="lines[]" value={line} label={line} />
          ))}
        </FieldGroup>
        <FieldGroup columns={2}>
          <TextArea name="reason" label="Reason" rows={2} wide />
          <NumberField name="limitPieces" label="Limited to pieces" optional unit="pieces" />
          <DateField name="limitUntil" label="Limited until" optional />
        </FieldGroup>
        {needsOutside && (
          <FieldGroup legend="Outside approval" hint="A failed pressure or burst calculation can be conceded only with a named approval from outside." columns={2}>
            <TextField name="outsideName" label="Name" optional />
            <TextField name="outsideOrganisation" label="Organisation" optional />
            <TextField name="outsideReference" label="Reference" optional />
            <DateField name="outsideOn" label="Of" optional />
          </FieldGroup>
        )}
        <SubmitButton weight="secondary" disabled={!proved} pendingText="Signing">
          Sign the concession
        </SubmitButton>
      </EntryForm>
    </details>
  );
}
