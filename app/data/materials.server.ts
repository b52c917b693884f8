import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import { toNumber, updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

/** For a select field: materials not set aside, by name. */
export async function listMaterialNames(tx: Tx): Promise<Array<{ id: string; name: string; code: string }>> {
  return tx("materials").select("id", "name", "code").whereNull("set_aside_at").orderBy("name");
}

export interface Material {
  id: string;
  code: string;
  name: string;
  densityKgM3: number;
  yieldMPa: number | null;
  tensileMPa: number | null;
  shearMPa: number | null;
  /** False: minimums of a standard. */
  typical: boolean;
  source: string;
  setAside: boolean;
  rowVersion: number;
}

interface MaterialRow {
  id: string;
  code: string;
  name: string;
  density_kg_m3: NumericText;
  yield_mpa: NumericText | null;
  tensile_mpa: NumericText | null;
  shear_mpa: NumericText | null;
  typical: boolean;
  source: string;
  set_aside_at: Date | null;
  row_version: number;
}

const columns = ["id", "code", "name", "density_kg_m3", "yield_mpa", "tensile_mpa", "shear_mpa", "typical", "source", "set_aside_at", "row_version"].map((column) => `materials.${column}`);

const toMaterial = (row: MaterialRow): Material => ({
  id: row.id,
  code: row.code,
  name: row.name,
  densityKgM3: Number(row.density_kg_m3),
  yieldMPa: toNumber(row.yield_mpa),
  tensileMPa: toNumber(row.tensile_mpa),
  shearMPa: toNumber(row.shear_mpa),
  typical: row.typical,
  source: row.source,
  setAside: row.set_aside_at !== null,
  rowVersion: row.row_version,
});

export const materialSorts = { code: "materials.code", name: "materials.name", density: "materials.density_kg_m3", yield: "materials.yield_mpa", tensile: "materials.tensile_mpa", shear: "materials.shear_mpa" } as const;

export async function listMaterials(tx: Tx, list: ListQuery, all = false): Promise<ListPage<Material>> {
  const query = tx("materials").select(columns);
  if (!list.withSetAside) void query.whereNull("materials.set_aside_at");
  const page = await listPage<MaterialRow>(query, list, { sortColumns: materialSorts, searched: ["materials.code", "materials.name"], tieBreak: "materials.id", all });
  return { ...page, rows: page.rows.map(toMaterial) };
}

export async function findMaterial(tx: Tx, id: string): Promise<Material | undefined> {
  const row = (await tx("materials").select(columns).where({ id }).first()) as MaterialRow | undefined;
  return row && toMaterial(row);
}

/** Does another material of the shop go by this code? */
export async function isMaterialCodeTaken(tx: Tx, code: string, exceptId: string | null): Promise<boolean> {
  const row = (await tx("materials").where({ code }).first("id")) as { id: string } | undefined;
  return row !== undefined && row.id !== exceptId;
}

export type MaterialValues = Omit<Material, "id" | "setAside" | "rowVersion">;

const toColumns = (values: MaterialValues) => ({
  code: values.code,
  name: values.name,
  density_kg_m3: values.densityKgM3,
  yield_mpa: values.yieldMPa,
  tensile_mpa: values.tensileMPa,
  shear_mpa: values.shearMPa,
  typical: values.typical,
  source: values.source,
});

export async function addMaterial(tx: Tx, shopId: string, values: MaterialValues): Promise<string> {
  const [row] = await tx("materials").insert({ shop_id: shopId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changeMaterial(tx: Tx, id: string, rowVersion: number, values: MaterialValues): Promise<boolean> {
  return updateIfUnchanged(tx, "materials", id, rowVersion, toColumns(values));
}
