import type { z } from "zod";

export type FieldErrors = Record<string, string[]>;

export type ParsedForm<T> = { ok: true; value: T } | { ok: false; errors: FieldErrors; values: Record<string, string> };

/**
 * Reads a form by its schema. A refused form comes back with what was typed, so that it can
 * be shown again filled; files never come this way.
 *
 * A name that ends in `[]` collects all of its fields into a list under the name without it.
 */
export function parseForm<Schema extends z.ZodType>(schema: Schema, form: FormData): ParsedForm<z.output<Schema>> {
  const raw: Record<string, unknown> = {};
  const values: Record<string, string> = {};
  for (const name of new Set(form.keys())) {
    const all = form.getAll(name).filter((value): value is string => typeof value === "string");
    if (name.endsWith("[]")) raw[name.slice(0, -2)] = all;
    else raw[name] = all.at(-1) ?? "";
    values[name] = all.join(", ");
  }
  const parsed = schema.safeParse(raw);
  if (parsed.success) return { ok: true, value: parsed.data };
  const errors: FieldErrors = {};
  for (const issue of parsed.error.issues) {
    const field = issue.path.length > 0 ? String(issue.path[0]) : "form";
    (errors[field] ??= []).push(issue.message);
  }
  return { ok: false, errors, values };
}
