import { dateText, toNumber, updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface MatingPart {
  id: string;
  jobId: string;
  name: string;
  description: string;
  cameInOn: string | null;
  conditionIn: string;
  wentOutOn: string | null;
  conditionOut: string;
  setAside: boolean;
  rowVersion: number;
  /** How many measurements it has. */
  measurements: number;
}

interface MatingPartRow {
  id: string;
  job_id: string;
  name: string;
  description: string;
  came_in_on: string | null;
  condition_in: string;
  went_out_on: string | null;
  condition_out: string;
  set_aside_at: Date | null;
  row_version: number;
  measurements: number;
}

function selectMatingParts(tx: Tx) {
  return tx("mating_parts")
    .select("id", "job_id", "name", "description", "condition_in", "condition_out", "set_aside_at", "row_version", dateText(tx, "came_in_on"), dateText(tx, "went_out_on"))
    .select(tx.raw("(select count(*)::integer from measurements m where m.mating_part_id = mating_parts.id and m.set_aside_at is null) as measurements"));
}

const toMatingPart = (row: MatingPartRow): MatingPart => ({
  id: row.id,
  jobId: row.job_id,
  name: row.name,
  description: row.description,
  cameInOn: row.came_in_on,
  conditionIn: row.condition_in,
  wentOutOn: row.went_out_on,
  conditionOut: row.condition_out,
  setAside: row.set_aside_at !== null,
  rowVersion: row.row_version,
  measurements: row.measurements,
});

export async function listMatingParts(tx: Tx, jobId: string): Promise<MatingPart[]> {
  const rows = (await selectMatingParts(tx).where({ job_id: jobId }).orderBy("name")) as MatingPartRow[];
  return rows.map(toMatingPart);
}

export async function findMatingPart(tx: Tx, id: string): Promise<MatingPart | undefined> {
  const row = (await selectMatingParts(tx).where({ id }).first()) as MatingPartRow | undefined;
  return row && toMatingPart(row);
}

export interface MatingPartValues {
  name: string;
  description: string;
  cameInOn: string | null;
  conditionIn: string;
  wentOutOn: string | null;
  conditionOut: string;
}

const toColumns = (values: MatingPartValues) => ({
  name: values.name,
  description: values.description,
  came_in_on: values.cameInOn,
  condition_in: values.conditionIn,
  went_out_on: values.wentOutOn,
  condition_out: values.conditionOut,
});

export async function addMatingPart(tx: Tx, shopId: string, jobId: string, values: MatingPartValues): Promise<string> {
  const [row] = await tx("mating_parts").insert({ shop_id: shopId, job_id: jobId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changeMatingPart(tx: Tx, id: string, rowVersion: number, values: MatingPartValues): Promise<boolean> {
  return updateIfUnchanged(tx, "mating_parts", id, rowVersion, toColumns(values));
}

export interface Measurement {
  id: string;
  name: string;
  /** As read; not rounded. */
  valueMm: number;
  instrument: string | null;
  instrumentId: string | null;
  uncertaintyMm: number | null;
  note: string;
  measuredOn: string;
  measuredBy: string | null;
  setAside: boolean;
}

export async function listMeasurements(tx: Tx, matingPartId: string): Promise<Measurement[]> {
  const rows = (await tx("measurements as m")
    .leftJoin("instruments as i", "i.id", "m.instrument_id")
    .leftJoin("people as p", "p.id", "m.measured_by")
    .where("m.mating_part_id", matingPartId)
    .orderBy("m.created_at")
    .select("m.id", "m.name", "m.value_mm", "i.name as instrument", "m.instrument_id", "m.uncertainty_mm", "m.note", "p.name as measured_by", "m.set_aside_at", dateText(tx, "m.measured_on"))) as Array<{
    id: string; name: string; value_mm: NumericText; instrument: string | null; instrument_id: string | null; uncertainty_mm: NumericText | null; note: string; measured_by: string | null; measured_on: string; set_aside_at: Date | null;
  }>;
  return rows.map((row) => ({
    id: row.id,
    name: row.name,
    valueMm: Number(row.value_mm),
    instrument: row.instrument,
    instrumentId: row.instrument_id,
    uncertaintyMm: toNumber(row.uncertainty_mm),
    note: row.note,
    measuredOn: row.measured_on,
    measuredBy: row.measured_by,
    setAside: row.set_aside_at !== null,
  }));
}

export async function addMeasurement(
  tx: Tx,
  measurement: { shopId: string; jobId: string; matingPartId: string; name: string; valueMm: number; instrumentId: string | null; uncertaintyMm: number | null; note: string; measuredBy: string | null },
): Promise<string> {
  const [row] = await tx("measurements")
    .insert({
      shop_id: measurement.shopId,
      job_id: measurement.jobId,
      mating_part_id: measurement.matingPartId,
      name: measurement.name,
      value_mm: measurement.valueMm,
      instrument_id: measurement.instrumentId,
      uncertainty_mm: measurement.uncertaintyMm,
      note: measurement.note,
      measured_by: measurement.measuredBy,
    })
    .returning("id");
  return row.id as string;
}

/** A measurement that was wrong is set aside, with its value kept: it may have shaped a revision. */
export async function setMeasurementAside(tx: Tx, id: string, aside: boolean): Promise<boolean> {
  return (await tx("measurements").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") })) === 1;
}

export async function findMeasurement(tx: Tx, id: string): Promise<{ id: string; jobId: string; matingPartId: string; name: string; valueMm: number } | undefined> {
  const row = (await tx("measurements").where({ id }).first("id", "job_id", "mating_part_id", "name", "value_mm")) as { id: string; job_id: string; mating_part_id: string; name: string; value_mm: NumericText } | undefined;
  return row && { id: row.id, jobId: row.job_id, matingPartId: row.mating_part_id, name: row.name, valueMm: Number(row.value_mm) };
}

export async function setMatingPartAside(tx: Tx, id: string, aside: boolean): Promise<void> {
  await tx("mating_parts").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") });
}
