import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import { updateIfUnchanged, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Printer {
  id: string;
  name: string;
  process: string;
  /** "220 × 220 × 250", as the maker says it. */
  bedMm: string;
  setAside: boolean;
  rowVersion: number;
  presets: number;
}

interface PrinterRow {
  id: string;
  name: string;
  process: string;
  bed_mm: string;
  set_aside_at: Date | null;
  row_version: number;
  presets: number;
}

function selectPrinters(tx: Tx) {
  return tx("printers")
    .select(...["id", "name", "process", "bed_mm", "set_aside_at", "row_version"].map((column) => `printers.${column}`))
    .select(tx.raw("(select count(*)::integer from print_presets p where p.printer_id = printers.id and p.set_aside_at is null) as presets"));
}

const toPrinter = (row: PrinterRow): Printer => ({ id: row.id, name: row.name, process: row.process, bedMm: row.bed_mm, setAside: row.set_aside_at !== null, rowVersion: row.row_version, presets: row.presets });

export const printerSorts = { name: "printers.name", process: "printers.process", presets: "presets" } as const;

export async function listPrinters(tx: Tx, list: ListQuery, all = false): Promise<ListPage<Printer>> {
  const query = selectPrinters(tx);
  if (!list.withSetAside) void query.whereNull("printers.set_aside_at");
  const page = await listPage<PrinterRow>(query, list, { sortColumns: printerSorts, searched: ["printers.name", "printers.process"], tieBreak: "printers.id", all });
  return { ...page, rows: page.rows.map(toPrinter) };
}

/** For a select field: those not set aside, by name. */
export async function listPrinterNames(tx: Tx): Promise<Array<{ id: string; name: string }>> {
  return tx("printers").select("id", "name").whereNull("set_aside_at").orderBy("name");
}

export async function findPrinter(tx: Tx, id: string): Promise<Printer | undefined> {
  const row = (await selectPrinters(tx).where("printers.id", id).first()) as PrinterRow | undefined;
  return row && toPrinter(row);
}

export type PrinterValues = Pick<Printer, "name" | "process" | "bedMm">;

const toColumns = ({ name, process, bedMm }: PrinterValues) => ({ name, process, bed_mm: bedMm });

export async function addPrinter(tx: Tx, shopId: string, values: PrinterValues): Promise<string> {
  const [row] = await tx("printers").insert({ shop_id: shopId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changePrinter(tx: Tx, id: string, rowVersion: number, values: PrinterValues): Promise<boolean> {
  return updateIfUnchanged(tx, "printers", id, rowVersion, toColumns(values));
}

export interface PrintPreset {
  id: string;
  printerId: string;
  printerName: string;
  name: string;
  material: string;
  layerMm: number;
  walls: number;
  infillPct: number;
  /** Factor on the model, an axis; 1 leaves it. */
  scaleX: number;
  scaleY: number;
  scaleZ: number;
  note: string;
  setAside: boolean;
  rowVersion: number;
}

interface PresetRow {
  id: string;
  printer_id: string;
  printer_name: string;
  name: string;
  material: string;
  layer_mm: NumericText;
  walls: number;
  infill_pct: NumericText;
  scale_x: NumericText;
  scale_y: NumericText;
  scale_z: NumericText;
  note: string;
  set_aside_at: Date | null;
  row_version: number;
}

const selectPresets = (tx: Tx) => tx("print_presets as p").join("printers as m", "m.id", "p.printer_id").select("p.*", "m.name as printer_name");

const toPreset = (row: PresetRow): PrintPreset => ({
  id: row.id,
  printerId: row.printer_id,
  printerName: row.printer_name,
  name: row.name,
  material: row.material,
  layerMm: Number(row.layer_mm),
  walls: row.walls,
  infillPct: Number(row.infill_pct),
  scaleX: Number(row.scale_x),
  scaleY: Number(row.scale_y),
  scaleZ: Number(row.scale_z),
  note: row.note,
  setAside: row.set_aside_at !== null,
  rowVersion: row.row_version,
});

export const presetSorts = { name: "p.name", printer: "m.name", material: "p.material", layer: "p.layer_mm", walls: "p.walls", infill: "p.infill_pct" } as const;

export async function listPresets(tx: Tx, list: ListQuery, all = false): Promise<ListPage<PrintPreset>> {
  const query = selectPresets(tx);
  if (!list.withSetAside) void query.whereNull("p.set_aside_at");
  const page = await listPage<PresetRow>(query, list, { sortColumns: presetSorts, searched: ["p.name", "m.name", "p.material"], tieBreak: "p.id", all });
  return { ...page, rows: page.rows.map(toPreset) };
}

export async function findPreset(tx: Tx, id: string): Promise<PrintPreset | undefined> {
  const row = (await selectPresets(tx).where("p.id", id).first()) as PresetRow | undefined;
  return row && toPreset(row);
}

export type PresetValues = Omit<PrintPreset, "id" | "printerName" | "setAside" | "rowVersion">;

const toPresetColumns = (values: PresetValues) => ({
  printer_id: values.printerId,
  name: values.name,
  material: values.material,
  layer_mm: values.layerMm,
  walls: values.walls,
  infill_pct: values.infillPct,
  scale_x: values.scaleX,
  scale_y: values.scaleY,
  scale_z: values.scaleZ,
  note: values.note,
});

export async function addPreset(tx: Tx, shopId: string, values: PresetValues): Promise<string> {
  const [row] = await tx("print_presets").insert({ shop_id: shopId, ...toPresetColumns(values) }).returning("id");
  return row.id as string;
}

export async function changePreset(tx: Tx, id: string, rowVersion: number, values: PresetValues): Promise<boolean> {
  return updateIfUnchanged(tx, "print_presets", id, rowVersion, toPresetColumns(values));
}
