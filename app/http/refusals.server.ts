import { data } from "react-router";
import { conflictsBetween, type Conflict } from "#app/domain/conflicts.ts";
import type { FieldErrors } from "./form.server.ts";

/** How a form comes back when it was not saved: filled as it was sent, with what stands in the way. */
export interface Refusal {
  errors: FieldErrors;
  values: Record<string, string>;
  /** Set when somebody saved first. */
  conflict: Conflict[] | null;
  /** The version that saving again would replace. */
  rowVersion: number | null;
}

/** The form as it was typed. */
export function typedValues(form: FormData): Record<string, string> {
  return Object.fromEntries([...form].filter((entry): entry is [string, string] => typeof entry[1] === "string"));
}

/** Refused for what was typed. */
export function mistaken({ errors, values }: { errors: FieldErrors; values: Record<string, string> }, status: 400 | 409 = 400) {
  return data<Refusal>({ errors, values, conflict: null, rowVersion: null }, { status });
}

/**
 * Refused because the row has another version by now. Saving again means that the newer one was
 * seen: the form carries its version from here on.
 *
 * @param yours, theirs both as they stand in the form, by field name
 */
export function overtaken(form: FormData, { labels, yours, theirs, rowVersion }: { labels: Record<string, string>; yours: Record<string, string>; theirs: Record<string, string>; rowVersion: number }) {
  return data<Refusal>({ errors: {}, values: { ...typedValues(form), rowVersion: String(rowVersion) }, conflict: conflictsBetween(labels, yours, theirs), rowVersion }, { status: 409 });
}

/** The version that the form was filled from; a missing one is 0, which no row has. */
export const readVersion = (form: FormData): number => Number(form.get("rowVersion")) || 0;

/** Which row a form changes, and at which version; null for a new one. */
export const readExisting = (id: string | null, form: FormData): { id: string; rowVersion: number } | null => (id === null ? null : { id, rowVersion: readVersion(form) });
