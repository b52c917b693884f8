import { toNumber, updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type CharacteristicKind = "limits" | "fit" | "min" | "max" | "yes-no";

export interface Characteristic {
  id: string;
  jobId: string;
  partId: string;
  matingPartId: string | null;
  name: string;
  kind: CharacteristicKind;
  nominalMm: number | null;
  lowerMm: number | null;
  upperMm: number | null;
  fitClass: string | null;
  printLowerMm: number | null;
  printUpperMm: number | null;
  question: string;
  method: string;
  places: number;
  required: boolean;
  critical: boolean;
  photoRequired: boolean;
  provableOnPrint: boolean;
  sort: number;
  setAside: boolean;
  rowVersion: number;
}

interface CharacteristicRow {
  id: string;
  job_id: string;
  part_id: string;
  mating_part_id: string | null;
  name: string;
  kind: CharacteristicKind;
  nominal_mm: NumericText | null;
  lower_mm: NumericText | null;
  upper_mm: NumericText | null;
  fit_class: string | null;
  print_lower_mm: NumericText | null;
  print_upper_mm: NumericText | null;
  question: string;
  method: string;
  places: number;
  required: boolean;
  critical: boolean;
  photo_required: boolean;
  provable_on_print: boolean;
  sort: number;
  set_aside_at: Date | null;
  row_version: number;
}

const toCharacteristic = (row: CharacteristicRow): Characteristic => ({
  id: row.id,
  jobId: row.job_id,
  partId: row.part_id,
  matingPartId: row.mating_part_id,
  name: row.name,
  kind: row.kind,
  nominalMm: toNumber(row.nominal_mm),
  lowerMm: toNumber(row.lower_mm),
  upperMm: toNumber(row.upper_mm),
  fitClass: row.fit_class,
  printLowerMm: toNumber(row.print_lower_mm),
  printUpperMm: toNumber(row.print_upper_mm),
  question: row.question,
  method: row.method,
  places: row.places,
  required: row.required,
  critical: row.critical,
  photoRequired: row.photo_required,
  provableOnPrint: row.provable_on_print,
  sort: row.sort,
  setAside: row.set_aside_at !== null,
  rowVersion: row.row_version,
});

/** The characteristics of a part in the order in which they are tried. */
export async function listCharacteristics(tx: Tx, partId: string, { withSetAside = false } = {}): Promise<Characteristic[]> {
  const query = tx("characteristics").where({ part_id: partId }).orderBy("sort").orderBy("created_at");
  if (!withSetAside) void query.whereNull("set_aside_at");
  return ((await query) as CharacteristicRow[]).map(toCharacteristic);
}

export async function findCharacteristic(tx: Tx, id: string): Promise<Characteristic | undefined> {
  const row = (await tx("characteristics").where({ id }).first()) as CharacteristicRow | undefined;
  return row && toCharacteristic(row);
}

export type CharacteristicValues = Omit<Characteristic, "id" | "jobId" | "partId" | "setAside" | "rowVersion" | "sort">;

const toColumns = (values: CharacteristicValues) => ({
  mating_part_id: values.matingPartId,
  name: values.name,
  kind: values.kind,
  nominal_mm: values.nominalMm,
  lower_mm: values.lowerMm,
  upper_mm: values.upperMm,
  fit_class: values.fitClass,
  print_lower_mm: values.printLowerMm,
  print_upper_mm: values.printUpperMm,
  question: values.question,
  method: values.method,
  places: values.places,
  required: values.required,
  critical: values.critical,
  photo_required: values.photoRequired,
  provable_on_print: values.provableOnPrint,
});

export async function addCharacteristic(tx: Tx, shopId: string, part: { id: string; jobId: string }, values: CharacteristicValues): Promise<string> {
  const [row] = await tx("characteristics")
    .insert({ shop_id: shopId, job_id: part.jobId, part_id: part.id, sort: tx.raw("(select coalesce(max(sort), 0) + 1 from characteristics where part_id = ?)", [part.id]), ...toColumns(values) })
    .returning("id");
  return row.id as string;
}

export async function changeCharacteristic(tx: Tx, id: string, rowVersion: number, values: CharacteristicValues): Promise<boolean> {
  return updateIfUnchanged(tx, "characteristics", id, rowVersion, toColumns(values));
}

export async function setCharacteristicAside(tx: Tx, id: string, aside: boolean): Promise<void> {
  await tx("characteristics").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") });
}

/** Does a fit check hold a result of it? */
export async function isTried(tx: Tx, id: string): Promise<boolean> {
  return (await tx("fit_results").where({ characteristic_id: id }).first("id")) !== undefined;
}
