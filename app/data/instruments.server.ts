import type { InstrumentTrust } from "#app/domain/trust.ts";
import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import { dateText, updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Instrument extends InstrumentTrust {
  id: string;
  name: string;
  kind: string;
  resolutionMm: number;
  /** Expanded uncertainty U (k = 2), half width. */
  uncertaintyMm: number;
  setAside: boolean;
  rowVersion: number;
}

interface InstrumentRow {
  id: string;
  name: string;
  kind: string;
  resolution_mm: NumericText;
  uncertainty_mm: NumericText;
  trust: InstrumentTrust["trust"];
  calibrated_until: string | null;
  checked_on: string | null;
  checked_with: string;
  set_aside_at: Date | null;
  row_version: number;
}

function selectInstruments(tx: Tx) {
  return tx("instruments").select(
    ...["id", "name", "kind", "resolution_mm", "uncertainty_mm", "trust", "checked_with", "set_aside_at", "row_version"].map((column) => `instruments.${column}`),
    dateText(tx, "instruments.calibrated_until"),
    dateText(tx, "instruments.checked_on"),
  );
}

const toInstrument = (row: InstrumentRow): Instrument => ({
  id: row.id,
  name: row.name,
  kind: row.kind,
  resolutionMm: Number(row.resolution_mm),
  uncertaintyMm: Number(row.uncertainty_mm),
  trust: row.trust,
  calibratedUntil: row.calibrated_until,
  checkedOn: row.checked_on,
  checkedWith: row.checked_with,
  setAside: row.set_aside_at !== null,
  rowVersion: row.row_version,
});

export const instrumentSorts = { name: "instruments.name", kind: "instruments.kind", resolution: "instruments.resolution_mm", uncertainty: "instruments.uncertainty_mm", trust: "instruments.trust" } as const;

export async function listInstruments(tx: Tx, list: ListQuery, all = false): Promise<ListPage<Instrument>> {
  const query = selectInstruments(tx);
  if (!list.withSetAside) void query.whereNull("instruments.set_aside_at");
  const page = await listPage<InstrumentRow>(query, list, { sortColumns: instrumentSorts, searched: ["instruments.name", "instruments.kind"], tieBreak: "instruments.id", all });
  return { ...page, rows: page.rows.map(toInstrument) };
}

export async function findInstrument(tx: Tx, id: string): Promise<Instrument | undefined> {
  const row = (await selectInstruments(tx).where("instruments.id", id).first()) as InstrumentRow | undefined;
  return row && toInstrument(row);
}

export type InstrumentValues = Omit<Instrument, "id" | "setAside" | "rowVersion">;

const toColumns = (values: InstrumentValues) => ({
  name: values.name,
  kind: values.kind,
  resolution_mm: values.resolutionMm,
  uncertainty_mm: values.uncertaintyMm,
  trust: values.trust,
  calibrated_until: values.calibratedUntil,
  checked_on: values.checkedOn,
  checked_with: values.checkedWith,
});

export async function addInstrument(tx: Tx, shopId: string, values: InstrumentValues): Promise<string> {
  const [row] = await tx("instruments").insert({ shop_id: shopId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changeInstrument(tx: Tx, id: string, rowVersion: number, values: InstrumentValues): Promise<boolean> {
  return updateIfUnchanged(tx, "instruments", id, rowVersion, toColumns(values));
}
