import { createContext, useCallback, useContext, useEffect, useId, useMemo, useRef, useState, type ReactNode } from "react";
import { Form, useNavigation, type FetcherWithComponents, type FormProps } from "react-router";
import { CrossedMark } from "#app/components/gate-marks.tsx";
import { countWord } from "#app/components/gate-words.ts";
import { buttonClass, type ButtonWeight } from "#app/components/link-button.tsx";
import { useUnits, type LengthUnit } from "#app/components/measure.tsx";

/** Faults by field name; the key "form" is for what no single field can mend. */
export type FormFaults = Record<string, string[]>;
/** What was typed, so that a refused form comes back filled. */
export type FormValues = Record<string, string>;

interface FormState {
  id: string;
  errors: FormFaults;
  values: FormValues | null;
  unit: LengthUnit;
  pending: boolean;
  pendingData: FormData | undefined;
}

const FormContext = createContext<FormState | null>(null);

/** The form a field stands in. */
export function useEntryForm(): FormState {
  const state = useContext(FormContext);
  if (!state) throw new TypeError("A field must stand inside an EntryForm");
  return state;
}

export interface EntryFormProps extends Omit<FormProps, "className" | "style" | "children"> {
  errors?: FormFaults;
  values?: FormValues;
  /** Words of a fault summary may name their field: { bore: "Pilot bore" }. */
  labels?: Record<string, string>;
  /** Sent as `intent`; tells several forms of one route apart. */
  intent?: string;
  /** Sends through this fetcher instead of navigating. */
  fetcher?: FetcherWithComponents<unknown>;
  /** Empties itself once it was sent without a fault: for an answer in a conversation, where the page stays. */
  clearWhenSent?: boolean;
  className?: string;
  children?: ReactNode;
}

const noFaults: FormFaults = {};

/**
 * The one form. Works without scripts; with them it says when it is sending and puts the
 * focus on the first fault. Sends `units` ("mm" or "in"), the unit its lengths were typed in:
 * switching the page's unit never changes the meaning of what already stands in a field.
 */
export function EntryForm({ errors = noFaults, values, labels, intent, fetcher, clearWhenSent = false, className, children, ...form }: EntryFormProps) {
  const id = useId();
  const element = useRef<HTMLFormElement>(null);
  const { unit, onInput, release } = useUnitOfForm(values);
  const { pending, pendingData } = usePending(intent, form.action, fetcher);
  const FormElement = fetcher?.Form ?? Form;

  useEffect(() => {
    if (Object.keys(errors).length === 0) return;
    const field = element.current?.querySelector<HTMLElement>('[aria-invalid="true"]');
    (field ?? element.current?.querySelector<HTMLElement>("[data-form-faults]"))?.focus();
  }, [errors]);

  const wasPending = useRef(false);
  useEffect(() => {
    if (clearWhenSent && wasPending.current && !pending && Object.keys(errors).length === 0) {
      element.current?.reset();
      release();
    }
    wasPending.current = pending;
  }, [clearWhenSent, pending, errors, release]);

  const state = useMemo(
    () => ({ id, errors, values: values ?? null, unit, pending, pendingData }),
    [id, errors, values, unit, pending, pendingData],
  );
  return (
    <FormContext.Provider value={state}>
      <FormElement method="post" noValidate {...form} ref={element} onInput={onInput} className={className}>
        <input type="hidden" name="units" value={unit} />
        {intent && <input type="hidden" name="intent" value={intent} />}
        <FormErrors errors={errors} labels={labels} />
        {children}
      </FormElement>
    </FormContext.Provider>
  );
}

/** The form keeps the unit it was begun in as soon as something is typed. */
function useUnitOfForm(values: FormValues | undefined) {
  const pageUnit = useUnits();
  const kept = values?.units === "mm" || values?.units === "in" ? values.units : null;
  const [touched, setTouched] = useState<LengthUnit | null>(null);
  const unit = touched ?? kept ?? pageUnit;
  const release = useCallback(() => setTouched(null), []);
  return { unit, onInput: () => setTouched((before) => before ?? unit), release };
}

function usePending(intent: string | undefined, action: FormProps["action"], fetcher: FetcherWithComponents<unknown> | undefined) {
  const navigation = useNavigation();
  if (fetcher) return { pending: fetcher.state !== "idle", pendingData: fetcher.formData };
  const data = navigation.formData;
  const mine = data !== undefined && (intent === undefined || data.get("intent") === intent);
  const here = typeof action !== "string" || navigation.formAction?.split("?")[0] === action.split("?")[0];
  const pending = navigation.state !== "idle" && mine && here;
  return { pending, pendingData: pending ? data : undefined };
}

/** What stands in the way, in words, each a link to its field. */
export function FormErrors({ errors, labels = {} }: { errors: FormFaults; labels?: Record<string, string> }) {
  const form = useContext(FormContext);
  const faults = Object.entries(errors).flatMap(([name, messages]) => messages.map((message) => ({ name, message })));
  if (faults.length === 0) return null;
  return (
    <div role="alert" tabIndex={-1} data-form-faults className="mb-5 flex gap-3 border-[1.5px] border-failed bg-failed-wash px-4 py-3">
      <CrossedMark className="mt-1.5 h-3 w-auto shrink-0" />
      <div className="min-w-0">
        {faults.some(({ name }) => name !== "form") && (
          <p className="font-semibold first-letter:uppercase">{`${countWord(faults.length)} ${faults.length === 1 ? "thing" : "things"} to mend`}</p>
        )}
        <ul className="mt-0.5">
          {faults.map(({ name, message }, index) => (
            <li key={index}>
              {name === "form" || !form ? (
                message
              ) : (
                <a href={`#${fieldId(form.id, name)}`} className="underline decoration-failed underline-offset-4">
                  {labels[name] ? `${labels[name]}: ${message}` : message}
                </a>
              )}
            </li>
          ))}
        </ul>
      </div>
    </div>
  );
}

export function fieldId(formId: string, name: string): string {
  return `${formId}-${name}`;
}

export interface FieldGroupProps {
  legend?: ReactNode;
  hint?: ReactNode;
  /** Cells side by side on a desk; always one on a phone. */
  columns?: 1 | 2 | 3 | 4;
  children: ReactNode;
}

const columnClass = { 1: "", 2: "sm:grid-cols-2", 3: "sm:grid-cols-3", 4: "sm:grid-cols-2 lg:grid-cols-4" };

/** Cells that share their rules, as in a title block. */
export function FieldGroup({ legend, hint, columns = 1, children }: FieldGroupProps) {
  return (
    <fieldset className="mb-5 min-w-0">
      {legend && <legend className="text-lg font-semibold">{legend}</legend>}
      {hint && <p className="max-w-prose text-soft">{hint}</p>}
      <div className={`grid grid-cols-[minmax(0,1fr)] ${columnClass[columns]} pb-px pr-px ${legend || hint ? "mt-2" : ""}`}>{children}</div>
    </fieldset>
  );
}

export interface SubmitButtonProps {
  weight?: ButtonWeight;
  bench?: boolean;
  wide?: boolean;
  /** Said while it sends: "Saving". */
  pendingText?: string;
  name?: string;
  value?: string;
  disabled?: boolean;
  formAction?: string;
  children: ReactNode;
}

/** Sends its form once: while it is sending, a second press does nothing. */
export function SubmitButton({ weight = "primary", bench, wide, pendingText, name, value, disabled, formAction, children }: SubmitButtonProps) {
  const form = useContext(FormContext);
  const sending = Boolean(form?.pending) && (name === undefined || form?.pendingData?.get(name) === value);
  return (
    <button
      type="submit"
      name={name}
      value={value}
      disabled={disabled}
      formAction={formAction}
      // aria-disabled and not disabled: the focus must not fall off the page while it sends.
      aria-disabled={form?.pending || undefined}
      onClick={(event) => form?.pending && event.preventDefault()}
      className={`${buttonClass(weight, bench)}${wide ? " w-full" : ""}`}
    >
      {sending ? `${pendingText ?? "Saving"} …` : children}
    </button>
  );
}

/** The row's version as it was read; a save over a newer one is refused and shown as a conflict. */
export function RowVersion({ value }: { value: number | string }) {
  return <input type="hidden" name="rowVersion" value={value} />;
}

export interface ConflictNoticeProps {
  /** Who changed it, when that may be said. */
  by?: string;
  changes: { field: string; yours: ReactNode; theirs: ReactNode }[];
  children?: ReactNode;
}

/** Somebody saved first: both versions side by side, nothing of yours lost. */
export function ConflictNotice({ by, changes, children }: ConflictNoticeProps) {
  const notice = useRef<HTMLDivElement>(null);
  // It stands above a form that may be longer than the screen.
  useEffect(() => notice.current?.focus(), [changes]);
  return (
    <div ref={notice} role="alert" tabIndex={-1} className="mb-5 border-[1.5px] border-attention px-4 py-3">
      <p className="font-semibold">{by ?? "Somebody"} changed this while you were writing. Nothing was saved yet.</p>
      <p className="text-soft">Your words still stand in the form. Save again to keep them over the other, or change them first.</p>
      <table className="mt-3 w-full text-left">
        <thead className="font-label text-label text-soft">
          <tr className="border-b border-rule">
            <th scope="col" className="py-1 pr-4 font-medium">Field</th>
            <th scope="col" className="py-1 pr-4 font-medium">Yours</th>
            <th scope="col" className="py-1 font-medium">Saved meanwhile</th>
          </tr>
        </thead>
        <tbody>
          {changes.map(({ field, yours, theirs }) => (
            <tr key={field} className="border-b border-hairline align-top last:border-b-0">
              <th scope="row" className="py-1.5 pr-4 font-medium">{field}</th>
              <td className="py-1.5 pr-4">{yours}</td>
              <td className="py-1.5">{theirs}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {children && <div className="mt-3">{children}</div>}
    </div>
  );
}
