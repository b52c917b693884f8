/** A field that two people changed at once. */
export interface Conflict {
  field: string;
  yours: string;
  theirs: string;
}

/**
 * Where do two versions of one record differ? Both are given as they stand in the form, by field name.
 *
 * @param labels the fields that are compared, in their order
 */
export function conflictsBetween(labels: Record<string, string>, yours: Record<string, string>, theirs: Record<string, string>): Conflict[] {
  return Object.entries(labels)
    .filter(([name]) => (yours[name] ?? "") !== (theirs[name] ?? ""))
    .map(([name, field]) => ({ field, yours: yours[name] ?? "", theirs: theirs[name] ?? "" }));
}
