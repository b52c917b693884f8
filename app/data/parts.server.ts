import type { GateLineName } from "#app/domain/gate-records.ts";
import { toNumber, updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Part {
  id: string;
  jobId: string;
  number: string;
  name: string;
  kit: string;
  materialId: string | null;
  materialName: string | null;
  densityKgM3: number | null;
  quantity: number;
  requiredLines: GateLineName[];
  requiredCalculations: Array<{ kind: string; hazard: "none" | "pressure" | "burst" }>;
  speedRpm: number | null;
  pressureMPa: number | null;
  temperatureC: number | null;
  fluid: string | null;
  lifting: boolean;
  setAside: boolean;
  rowVersion: number;
}

interface PartRow {
  id: string;
  job_id: string;
  number: string;
  name: string;
  kit: string;
  material_id: string | null;
  material_name: string | null;
  density_kg_m3: NumericText | null;
  quantity: number;
  required_lines: GateLineName[];
  required_calculations: Part["requiredCalculations"];
  speed_rpm: NumericText | null;
  pressure_mpa: NumericText | null;
  temperature_c: NumericText | null;
  fluid: string | null;
  lifting: boolean;
  set_aside_at: Date | null;
  row_version: number;
}

function selectParts(tx: Tx) {
  return tx("parts")
    .leftJoin("materials", "materials.id", "parts.material_id")
    .select("parts.*", "materials.name as material_name", "materials.density_kg_m3");
}

function toPart(row: PartRow): Part {
  return {
    id: row.id,
    jobId: row.job_id,
    number: row.number,
    name: row.name,
    kit: row.kit,
    materialId: row.material_id,
    materialName: row.material_name,
    densityKgM3: toNumber(row.density_kg_m3),
    quantity: row.quantity,
    requiredLines: row.required_lines,
    requiredCalculations: row.required_calculations,
    speedRpm: toNumber(row.speed_rpm),
    pressureMPa: toNumber(row.pressure_mpa),
    temperatureC: toNumber(row.temperature_c),
    fluid: row.fluid,
    lifting: row.lifting,
    setAside: row.set_aside_at !== null,
    rowVersion: row.row_version,
  };
}

export async function listPartsOfJob(tx: Tx, jobId: string): Promise<Part[]> {
  const rows = (await selectParts(tx).where("parts.job_id", jobId).orderBy("parts.number")) as PartRow[];
  return rows.map(toPart);
}

export async function findPart(tx: Tx, id: string): Promise<Part | undefined> {
  const row = (await selectParts(tx).where("parts.id", id).first()) as PartRow | undefined;
  return row && toPart(row);
}

export interface PartValues {
  number: string;
  name: string;
  kit: string;
  materialId: string | null;
  quantity: number;
  requiredLines: GateLineName[];
  requiredCalculations: Part["requiredCalculations"];
  speedRpm: number | null;
  pressureMPa: number | null;
  temperatureC: number | null;
  fluid: string | null;
  lifting: boolean;
}

const toColumns = (values: PartValues) => ({
  number: values.number,
  name: values.name,
  kit: values.kit,
  material_id: values.materialId,
  quantity: values.quantity,
  required_lines: values.requiredLines,
  required_calculations: JSON.stringify(values.requiredCalculations),
  speed_rpm: values.speedRpm,
  pressure_mpa: values.pressureMPa,
  temperature_c: values.temperatureC,
  fluid: values.fluid,
  lifting: values.lifting,
});

export async function addPart(tx: Tx, shopId: string, jobId: string, values: PartValues): Promise<string> {
  const [row] = await tx("parts").insert({ shop_id: shopId, job_id: jobId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changePart(tx: Tx, id: string, rowVersion: number, values: PartValues): Promise<boolean> {
  return updateIfUnchanged(tx, "parts", id, rowVersion, toColumns(values));
}

export async function setPartAside(tx: Tx, id: string, aside: boolean): Promise<void> {
  await tx("parts").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") });
}

export interface PartOnJob extends Part {
  latestRevisionId: string | null;
  latestOrdinal: number | null;
  /** Letter of the latest release, where there is one. */
  letter: string | null;
}

/**
 * The parts of a job, each with its newest revision that is not set aside.
 *
 * @param onlyShared of the revisions that were shown to the customer
 */
export async function listPartsWithLatest(tx: Tx, jobId: string, { onlyShared }: { onlyShared: boolean }): Promise<PartOnJob[]> {
  const rows = (await selectParts(tx)
    .where("parts.job_id", jobId)
    .orderBy("parts.number")
    .joinRaw(`left join lateral (select r.id, r.ordinal from revisions r where r.part_id = parts.id ${onlyShared ? "and r.shared_at is not null" : ""} order by r.set_aside_at is not null, r.ordinal desc limit 1) latest on true`)
    .joinRaw(`left join lateral (select d.letter from decisions d where d.part_id = parts.id and d.letter is not null order by d.at desc limit 1) released on true`)
    .select("latest.id as latest_id", "latest.ordinal as latest_ordinal", "released.letter")) as Array<PartRow & { latest_id: string | null; latest_ordinal: number | null; letter: string | null }>;
  return rows.map((row) => ({ ...toPart(row), latestRevisionId: row.latest_id, latestOrdinal: row.latest_ordinal, letter: row.letter }));
}
