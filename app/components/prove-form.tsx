import { href } from "react-router";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, SubmitButton, type FormFaults } from "#app/components/form.tsx";

/** Who signs proves again who they are: by password here, by e-mailed code or GitHub on the page for it. */
export function ProveForm({ returnTo, errors }: { returnTo: string; errors?: FormFaults }) {
  return (
    <div className="mb-6 border-[1.5px] border-rule px-4 py-4">
      <p className="mb-3 max-w-prose">A signature asks that you signed in within the last five minutes. Prove again that it is you.</p>
      <EntryForm action={href("/prove")} errors={errors} labels={{ password: "Password" }}>
        <input type="hidden" name="returnTo" value={returnTo} />
        <div className="flex flex-wrap items-end gap-3">
          <div className="grid min-w-56 grow pb-px pr-px sm:max-w-80">
            <TextField name="password" label="Password" type="password" autoComplete="current-password" />
          </div>
          <SubmitButton name="intent" value="password" weight="secondary" pendingText="Looking">
            Prove it
          </SubmitButton>
          <SubmitButton name="intent" value="link" weight="quiet" pendingText="Sending">
            Send me a link instead
          </SubmitButton>
        </div>
      </EntryForm>
    </div>
  );
}
