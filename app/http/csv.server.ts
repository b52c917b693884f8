import { stringify } from "csv-stringify/sync";

/**
 * A table as a CSV file. A text that a spreadsheet would run as a formula is quoted by an
 * apostrophe (OWASP, "CSV injection"); numbers stay numbers.
 */
export function csvResponse(name: string, columns: Array<{ key: string; header: string }>, rows: Array<Record<string, unknown>>): Response {
  const safe = (value: unknown) => (typeof value === "string" && /^[=+\-@\t\r]/.test(value) ? `'${value}` : value);
  const body = stringify(
    rows.map((row) => columns.map(({ key }) => safe(row[key]) ?? "")),
    { header: true, columns: columns.map(({ header }) => header), cast: { boolean: (value) => (value ? "yes" : "no"), date: (value) => value.toISOString() } },
  );
  return new Response(`\uFEFF${body}`, {
    headers: { "Content-Type": "text/csv; charset=utf-8", "Content-Disposition": `attachment; filename="${name.replace(/[^\w.-]+/g, "-")}.csv"`, "Cache-Control": "no-store" },
  });
}
