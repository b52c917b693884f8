import { dateText, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Scale {
  x: number;
  y: number;
  z: number;
}

export interface Print {
  id: string;
  jobId: string;
  revisionId: string;
  /** "4.1": the revision and the print's number in it. */
  name: string;
  presetName: string;
  whole: boolean;
  /** What a partial print is a piece of. */
  piece: string;
  fileId: string | null;
  fileName: string | null;
  /** Of the file it was sliced from. */
  modelSha256: string;
  /** 1 is as modelled. */
  scale: Scale;
  /** yyyy-mm-dd */
  printedOn: string;
  note: string;
  /** Why it does not count, when it doesn't. */
  spoiled: string | null;
  byName: string;
  at: Date;
  /** Characteristics a partial print can prove; a whole one proves all. */
  proves: string[];
  /** How often it was tried on. */
  fitChecks: number;
}

interface PrintRow {
  id: string;
  job_id: string;
  revision_id: string;
  ordinal: number;
  revision_ordinal: number;
  preset_name: string;
  whole: boolean;
  piece: string;
  file_id: string | null;
  file_name: string | null;
  model_sha256: string;
  scale_x: NumericText;
  scale_y: NumericText;
  scale_z: NumericText;
  printed_on: string;
  note: string;
  spoiled: string | null;
  by_name: string;
  at: Date;
  proves: string[];
  fit_checks: number;
}

function selectPrints(tx: Tx) {
  return tx("prints")
    .join("revisions", "revisions.id", "prints.revision_id")
    .leftJoin("files", "files.id", "prints.file_id")
    .orderBy("prints.ordinal")
    .select("prints.id", "prints.job_id", "prints.revision_id", "prints.ordinal", "revisions.ordinal as revision_ordinal", "prints.preset_name", "prints.whole", "prints.piece", "prints.file_id", "files.name as file_name")
    .select("prints.model_sha256", "prints.scale_x", "prints.scale_y", "prints.scale_z", "prints.note", "prints.spoiled", "prints.by_name", "prints.at", dateText(tx, "prints.printed_on"))
    .select(tx.raw("(select coalesce(array_agg(p.characteristic_id order by p.characteristic_id), '{}') from print_proves p where p.print_id = prints.id) as proves"))
    .select(tx.raw("(select count(*)::integer from fit_checks f where f.print_id = prints.id) as fit_checks"));
}

const toPrint = (row: PrintRow): Print => ({
  id: row.id,
  jobId: row.job_id,
  revisionId: row.revision_id,
  name: `${row.revision_ordinal}.${row.ordinal}`,
  presetName: row.preset_name,
  whole: row.whole,
  piece: row.piece,
  fileId: row.file_id,
  fileName: row.file_name,
  modelSha256: row.model_sha256,
  scale: { x: Number(row.scale_x), y: Number(row.scale_y), z: Number(row.scale_z) },
  printedOn: row.printed_on,
  note: row.note,
  spoiled: row.spoiled,
  byName: row.by_name,
  at: row.at,
  proves: row.proves,
  fitChecks: row.fit_checks,
});

export async function findPrint(tx: Tx, id: string): Promise<Print | undefined> {
  const row = (await selectPrints(tx).where("prints.id", id).first()) as PrintRow | undefined;
  return row && toPrint(row);
}

export async function listPrints(tx: Tx, revisionId: string): Promise<Print[]> {
  return ((await selectPrints(tx).where("prints.revision_id", revisionId)) as PrintRow[]).map(toPrint);
}

export interface NewPrint {
  shopId: string;
  jobId: string;
  revisionId: string;
  presetId: string;
  presetName: string;
  whole: boolean;
  piece: string;
  fileId: string;
  modelSha256: string;
  scale: Scale;
  printedOn: string;
  note: string;
  proves: readonly string[];
  by: { personId: string | null; name: string };
}

/** Adds the revision's next print. The revision's row is locked by the caller, so that two at once get two numbers. */
export async function addPrint(tx: Tx, print: NewPrint): Promise<string> {
  const place = { shop_id: print.shopId, job_id: print.jobId, revision_id: print.revisionId };
  const [row] = await tx("prints")
    .insert({
      ...place,
      ordinal: tx.raw("(select coalesce(max(ordinal), 0) + 1 from prints where revision_id = ?)", [print.revisionId]),
      preset_id: print.presetId,
      preset_name: print.presetName,
      whole: print.whole,
      piece: print.piece,
      file_id: print.fileId,
      model_sha256: print.modelSha256,
      scale_x: print.scale.x,
      scale_y: print.scale.y,
      scale_z: print.scale.z,
      printed_on: print.printedOn,
      note: print.note,
      by_person_id: print.by.personId,
      by_name: print.by.name,
    })
    .returning("id");
  if (print.proves.length > 0) await tx("print_proves").insert(print.proves.map((characteristic) => ({ ...place, print_id: row.id, characteristic_id: characteristic })));
  return row.id as string;
}

export async function setPrintSpoiled(tx: Tx, id: string, reason: string | null): Promise<void> {
  await tx("prints").where({ id }).update({ spoiled: reason });
}

/** A preset as a print is made from it: picked, never typed. */
export interface PickedPreset {
  id: string;
  /** "Voss 300, PETG 0.2 mm, 4 walls, 40 % infill" */
  words: string;
  name: string;
  scale: Scale;
}

export async function listPresetsToPick(tx: Tx): Promise<PickedPreset[]> {
  const rows = (await tx("print_presets as p")
    .join("printers as m", "m.id", "p.printer_id")
    .whereNull("p.set_aside_at")
    .whereNull("m.set_aside_at")
    .orderBy("m.name")
    .orderBy("p.name")
    .select("p.id", "p.name", "p.material", "p.layer_mm", "p.walls", "p.infill_pct", "p.scale_x", "p.scale_y", "p.scale_z", "m.name as printer")) as Array<{
    id: string; name: string; material: string; layer_mm: NumericText; walls: number; infill_pct: NumericText; scale_x: NumericText; scale_y: NumericText; scale_z: NumericText; printer: string;
  }>;
  return rows.map((row) => ({
    id: row.id,
    name: row.name,
    words: `${row.printer}, ${row.name}: ${row.material}, layer ${Number(row.layer_mm)} mm, ${row.walls === 1 ? "1 wall" : `${row.walls} walls`}, ${Number(row.infill_pct)} % infill`,
    scale: { x: Number(row.scale_x), y: Number(row.scale_y), z: Number(row.scale_z) },
  }));
}
