import type { z } from "zod";

export type FieldErrors = Record<string, string[]>;

export type ParsedForm<T> = { ok: true; value: T } | { ok: false; errors: FieldErrors; values: Record<string, string> };

export type LengthUnit = "mm" | "in";

/**
 * Reads a form by its schema. A refused form comes back with what was typed, so that it can
 * be shown again filled; files never come this way.
 *
 * A name that ends in `[]` collects all of its fields into a list under the name without it.
 *
 * @param schema or, where the form has lengths, a function that makes it for the unit in which
 *   they were typed: the form says it, whatever the person's setting is by now
 */
export function parseForm<Schema extends z.ZodType>(schema: Schema | ((units: LengthUnit) => Schema), form: FormData): ParsedForm<z.output<Schema>> {
  const raw: Record<string, unknown> = {};
  const values: Record<string, string> = {};
  for (const name of new Set(form.keys())) {
    const all = form.getAll(name).filter((value): value is string => typeof value === "string");
    if (name.endsWith("[]")) raw[name.slice(0, -2)] = all;
    else raw[name] = all.at(-1) ?? "";
    values[name] = all.join(", ");
  }
  const made = typeof schema === "function" ? schema(form.get("units") === "in" ? "in" : "mm") : schema;
  const parsed = made.safeParse(raw);
  if (parsed.success) return { ok: true, value: parsed.data };
  const errors: FieldErrors = {};
  for (const issue of parsed.error.issues) {
    const field = issue.path.length > 0 ? String(issue.path[0]) : "form";
    (errors[field] ??= []).push(issue.message);
  }
  return { ok: false, errors, values };
}
