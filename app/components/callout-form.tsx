import type { ReactNode } from "react";
import { RadioRow, SelectField, TextArea } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton, type FormFaults, type FormValues } from "#app/components/form.tsx";

export interface CalloutFormProps {
  errors?: FormFaults;
  values?: FormValues;
  /** Whom it can be given to; null for customers, who write to the shop. */
  people: Array<{ personId: string; name: string }> | null;
  /** The spot: a photo to touch, or a point of the model. */
  children: ReactNode;
}

/** Words fixed to a spot; whoever belongs to the shop says who may read them. */
export function CalloutForm({ errors, values, people, children }: CalloutFormProps) {
  return (
    <EntryForm intent="put" errors={errors} values={values} labels={{ body: "What you mean", x: "Spot", y: "Spot", point: "Point" }}>
      {children}
      <div className="mt-4 max-w-2xl">
        <FieldGroup>
          <TextArea name="body" label={people ? "What about it" : "What you would like to say about this spot"} maxLength={4000} />
          {people && (
            <RadioRow
              name="visibility"
              label="Who may read it"
              defaultValue="internal"
              options={[
                { value: "internal", label: "The shop only", hint: "and its machinists" },
                { value: "customer", label: "The customer too", hint: "once the revision is shown to them" },
              ]}
            />
          )}
          {people && <SelectField name="assigneeId" label="Given to" optional prompt="Nobody yet" options={people.map(({ personId, name }) => ({ value: personId, label: name }))} />}
        </FieldGroup>
        <SubmitButton pendingText="Putting">Put the callout</SubmitButton>
      </div>
    </EntryForm>
  );
}
