import type { InputHTMLAttributes, ReactNode } from "react";
import { CrossedMark } from "#app/components/gate-marks.tsx";
import { fieldId, useEntryForm } from "#app/components/form.tsx";
import { lengthEntry } from "#app/components/measure-text.ts";

export interface FieldProps {
  name: string;
  label: ReactNode;
  hint?: ReactNode;
  /** Said after the label; required is the rule, so only the exception is marked. */
  optional?: boolean;
  defaultValue?: string | number | null;
  disabled?: boolean;
  /** The cell runs over the whole width of its group. */
  wide?: boolean;
}

interface CellControl {
  id: string;
  name: string;
  "aria-invalid": true | undefined;
  "aria-describedby": string | undefined;
  required: boolean;
  disabled: boolean | undefined;
  text: string;
}

function useControl({ name, hint, optional, disabled, defaultValue }: FieldProps) {
  const form = useEntryForm();
  const id = fieldId(form.id, name);
  const messages = form.errors[name] ?? [];
  const describedBy = [hint ? `${id}-hint` : "", messages.length ? `${id}-fault` : ""].filter(Boolean).join(" ");
  const control: CellControl = {
    id,
    name,
    "aria-invalid": messages.length > 0 || undefined,
    "aria-describedby": describedBy || undefined,
    required: !optional,
    disabled,
    text: form.values?.[name] ?? String(defaultValue ?? ""),
  };
  return { control, messages, unit: form.unit };
}

export interface FormFieldProps extends FieldProps {
  children: (control: CellControl) => ReactNode;
  after?: ReactNode;
}

/** The cell itself: label above, value, hint and faults below, all tied together for readers. */
export function FormField({ children, after, ...field }: FormFieldProps) {
  const { control, messages } = useControl(field);
  return (
    <div className={`entry${field.wide ? " col-span-full" : ""}`}>
      <label htmlFor={control.id} className="block font-label text-label font-medium text-soft">
        {field.label}
        {field.optional && <span className="font-normal"> (may stay empty)</span>}
      </label>
      <div className="flex items-baseline gap-2">
        {children(control)}
        {after && <span className="shrink-0 text-soft">{after}</span>}
      </div>
      <HintAndFaults id={control.id} hint={field.hint} messages={messages} />
    </div>
  );
}

function HintAndFaults({ id, hint, messages }: { id: string; hint?: ReactNode; messages: string[] }) {
  return (
    <>
      {hint && (
        <p id={`${id}-hint`} className="text-sm text-soft">
          {hint}
        </p>
      )}
      {messages.length > 0 && (
        <p id={`${id}-fault`} className="mt-0.5 flex items-start gap-2 text-sm font-medium text-failed">
          <CrossedMark className="mt-1.5 h-2.5 w-auto shrink-0" />
          <span>{messages.join(" ")}</span>
        </p>
      )}
    </>
  );
}

export interface TextFieldProps extends FieldProps {
  type?: "text" | "email" | "password" | "tel" | "url" | "search";
  autoComplete?: string;
  inputMode?: InputHTMLAttributes<HTMLInputElement>["inputMode"];
  placeholder?: string;
  maxLength?: number;
  autoFocus?: boolean;
  /** Words offered while typing; anything else may be typed too. */
  suggestions?: string[];
}

export function TextField({ type = "text", autoComplete = "off", inputMode, placeholder, maxLength, autoFocus, suggestions, ...field }: TextFieldProps) {
  return (
    <FormField {...field}>
      {({ text, ...control }) => (
        <>
          <input
            {...control}
            type={type}
            // A password never comes back filled.
            defaultValue={type === "password" ? undefined : text}
            autoComplete={autoComplete}
            inputMode={inputMode}
            placeholder={placeholder}
            maxLength={maxLength}
            autoFocus={autoFocus}
            list={suggestions ? `${control.id}-list` : undefined}
            className="entry-value"
          />
          {suggestions && (
            <datalist id={`${control.id}-list`}>
              {suggestions.map((word) => (
                <option key={word} value={word} />
              ))}
            </datalist>
          )}
        </>
      )}
    </FormField>
  );
}

export interface NumberFieldProps extends FieldProps {
  /** Unit as it is said behind the value: "rpm", "N", "pieces". */
  unit?: ReactNode;
  placeholder?: string;
}

/** A text box with a number keyboard: the server reads "1,5" and "1.5" and says what it could not read. */
export function NumberField({ unit, placeholder, ...field }: NumberFieldProps) {
  return (
    <FormField {...field} after={unit}>
      {({ text, ...control }) => (
        <input {...control} type="text" inputMode="decimal" autoComplete="off" defaultValue={text} placeholder={placeholder} className="entry-value" />
      )}
    </FormField>
  );
}

export interface LengthFieldProps extends Omit<FieldProps, "defaultValue"> {
  /** Stored length in mm; shown in the form's unit. */
  defaultMm?: number | string | null;
  placeholder?: string;
}

/**
 * A length in the form's unit, which is sent beside it as `units`. Fractions ("1 3/8") and a
 * unit of its own ("10 mm") may be typed; the server reads the text.
 */
export function LengthField({ defaultMm, placeholder, ...field }: LengthFieldProps) {
  const { unit } = useEntryForm();
  return (
    <FormField {...field} defaultValue={defaultMm == null || defaultMm === "" ? null : lengthEntry(defaultMm, unit)} after={unit}>
      {({ text, ...control }) => (
        <input
          // A new unit is a new entry: the untouched value is written again in it.
          key={unit}
          {...control}
          type="text"
          inputMode={unit === "in" ? "text" : "decimal"}
          autoComplete="off"
          defaultValue={text}
          placeholder={placeholder}
          className="entry-value"
        />
      )}
    </FormField>
  );
}

export interface ChoiceOption {
  value: string;
  label: string;
  hint?: ReactNode;
  disabled?: boolean;
}

export interface SelectFieldProps extends FieldProps {
  options: ChoiceOption[];
  /** First, empty line: "Pick a material". */
  prompt?: string;
}

export function SelectField({ options, prompt, ...field }: SelectFieldProps) {
  return (
    <FormField {...field}>
      {({ text, ...control }) => (
        <select {...control} defaultValue={text} className="entry-value">
          {prompt !== undefined && <option value="">{prompt}</option>}
          {options.map(({ value, label, disabled }) => (
            <option key={value} value={value} disabled={disabled}>
              {label}
            </option>
          ))}
        </select>
      )}
    </FormField>
  );
}

export interface DateFieldProps extends FieldProps {
  min?: string;
  max?: string;
}

/** A day as YYYY-MM-DD. */
export function DateField({ min, max, ...field }: DateFieldProps) {
  return (
    <FormField {...field}>
      {({ text, ...control }) => <input {...control} type="date" min={min} max={max} defaultValue={text} className="entry-value" />}
    </FormField>
  );
}

export interface TextAreaProps extends FieldProps {
  rows?: number;
  placeholder?: string;
  maxLength?: number;
}

export function TextArea({ rows = 3, placeholder, maxLength, ...field }: TextAreaProps) {
  return (
    <FormField {...field}>
      {({ text, ...control }) => (
        <textarea {...control} rows={rows} defaultValue={text} placeholder={placeholder} maxLength={maxLength} className="entry-value resize-y font-normal" />
      )}
    </FormField>
  );
}

export interface CheckFieldProps extends Omit<FieldProps, "defaultValue"> {
  defaultChecked?: boolean;
  value?: string;
}

/** A square to fill in; sends `value` ("on") or nothing. */
export function CheckField({ defaultChecked, value = "on", ...field }: CheckFieldProps) {
  const form = useEntryForm();
  const { control, messages } = useControl({ ...field, optional: true });
  const { text: _, ...input } = control;
  const checked = form.values ? form.values[field.name] === value : defaultChecked;
  return (
    <div className={`entry${field.wide ? " col-span-full" : ""}`}>
      <label htmlFor={input.id} className="flex min-h-11 items-center gap-3">
        <input {...input} type="checkbox" value={value} defaultChecked={checked} className="tick" />
        <span className="font-medium">{field.label}</span>
      </label>
      <HintAndFaults id={input.id} hint={field.hint} messages={messages} />
    </div>
  );
}

export interface RadioRowProps extends FieldProps {
  options: ChoiceOption[];
}

/** One of a few, all in sight; for more than five take SelectField. */
export function RadioRow({ options, ...field }: RadioRowProps) {
  const { control, messages } = useControl(field);
  return (
    <fieldset className={`entry${field.wide ? " col-span-full" : ""}`} aria-describedby={control["aria-describedby"]}>
      <legend className="float-left w-full font-label text-label font-medium text-soft">{field.label}</legend>
      <div className="clear-both flex flex-wrap gap-x-7">
        {options.map(({ value, label, hint, disabled }, index) => (
          <label key={value} className="flex min-h-11 items-center gap-2.5">
            <input
              type="radio"
              id={index === 0 ? control.id : undefined}
              name={field.name}
              value={value}
              defaultChecked={control.text === value}
              disabled={disabled || field.disabled}
              aria-invalid={control["aria-invalid"]}
              className="tick"
            />
            <span>
              <span className="font-medium">{label}</span>
              {hint && <span className="block text-sm text-soft">{hint}</span>}
            </span>
          </label>
        ))}
      </div>
      <HintAndFaults id={control.id} hint={field.hint} messages={messages} />
    </fieldset>
  );
}
