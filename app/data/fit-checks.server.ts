import type { FitCause } from "#app/domain/fit-causes.ts";
import { dateText, toNumber, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type { FitCause };

export interface FitCheck {
  id: string;
  jobId: string;
  revisionId: string;
  printId: string;
  matingPartId: string;
  matingPartName: string;
  cause: FitCause | null;
  remarks: string;
  byPersonId: string | null;
  byName: string;
  at: Date;
}

interface FitCheckRow {
  id: string;
  job_id: string;
  revision_id: string;
  print_id: string;
  mating_part_id: string;
  mating_part_name: string;
  cause: FitCause | null;
  remarks: string;
  by_person_id: string | null;
  by_name: string;
  at: Date;
}

function selectFitChecks(tx: Tx) {
  return tx("fit_checks as f").join("mating_parts as m", "m.id", "f.mating_part_id").orderBy("f.at", "desc").orderBy("f.id")
    .select("f.id", "f.job_id", "f.revision_id", "f.print_id", "f.mating_part_id", "m.name as mating_part_name", "f.cause", "f.remarks", "f.by_person_id", "f.by_name", "f.at");
}

const toFitCheck = (row: FitCheckRow): FitCheck => ({
  id: row.id,
  jobId: row.job_id,
  revisionId: row.revision_id,
  printId: row.print_id,
  matingPartId: row.mating_part_id,
  matingPartName: row.mating_part_name,
  cause: row.cause,
  remarks: row.remarks,
  byPersonId: row.by_person_id,
  byName: row.by_name,
  at: row.at,
});

export async function findFitCheck(tx: Tx, id: string): Promise<FitCheck | undefined> {
  const row = (await selectFitChecks(tx).where("f.id", id).first()) as FitCheckRow | undefined;
  return row && toFitCheck(row);
}

export async function findFitCheckByDraft(tx: Tx, draftKey: string): Promise<FitCheck | undefined> {
  const row = (await selectFitChecks(tx).where("f.draft_key", draftKey).first()) as FitCheckRow | undefined;
  return row && toFitCheck(row);
}

/** Newest first. */
export async function listFitChecksOfPrint(tx: Tx, printId: string): Promise<FitCheck[]> {
  return ((await selectFitChecks(tx).where("f.print_id", printId)) as FitCheckRow[]).map(toFitCheck);
}

/** Newest first. */
export async function listFitChecks(tx: Tx, revisionId: string): Promise<FitCheck[]> {
  return ((await selectFitChecks(tx).where("f.revision_id", revisionId)) as FitCheckRow[]).map(toFitCheck);
}

export interface FitResult {
  id: string;
  fitCheckId: string;
  characteristicId: string;
  /** As read, one a place. */
  readingsMm: number[];
  answers: boolean[];
  instrument: string | null;
  trust: "calibrated" | "checked" | "unverified" | null;
  /** U of the instrument when it was read. */
  uncertaintyMm: number | null;
  bandPositionMm: number | null;
  bandWidthMm: number | null;
}

interface FitResultRow {
  id: string;
  fit_check_id: string;
  characteristic_id: string;
  readings_mm: NumericText[];
  answers: boolean[];
  instrument_name: string | null;
  trust: FitResult["trust"];
  uncertainty_mm: NumericText | null;
  band_position_mm: NumericText | null;
  band_width_mm: NumericText | null;
}

/** The results of these fit checks, in the order in which their characteristics are tried. */
export async function listFitResults(tx: Tx, fitCheckIds: readonly string[]): Promise<FitResult[]> {
  if (fitCheckIds.length === 0) return [];
  const rows = (await tx("fit_results as r")
    .join("characteristics as c", "c.id", "r.characteristic_id")
    .leftJoin("instruments as i", "i.id", "r.instrument_id")
    .whereIn("r.fit_check_id", fitCheckIds)
    .orderBy("c.sort")
    .orderBy("r.id")
    .select("r.id", "r.fit_check_id", "r.characteristic_id", "r.readings_mm", "r.answers", "r.uncertainty_mm", "r.band_position_mm", "r.band_width_mm", "i.name as instrument_name", "i.trust")) as FitResultRow[];
  return rows.map((row) => ({
    id: row.id,
    fitCheckId: row.fit_check_id,
    characteristicId: row.characteristic_id,
    readingsMm: row.readings_mm.map(Number),
    answers: row.answers,
    instrument: row.instrument_name,
    trust: row.trust,
    uncertaintyMm: toNumber(row.uncertainty_mm),
    bandPositionMm: toNumber(row.band_position_mm),
    bandWidthMm: toNumber(row.band_width_mm),
  }));
}

export interface NewFitResult {
  characteristicId: string;
  readingsMm: number[];
  answers: boolean[];
  instrumentId: string | null;
  uncertaintyMm: number | null;
  bandPositionMm: number | null;
  bandWidthMm: number | null;
}

/**
 * Adds a fit check with its results, unless this draft was stored before.
 *
 * @returns null when the draft is there already; of two sendings at once one gets null
 */
export async function addFitCheck(
  tx: Tx,
  check: { shopId: string; jobId: string; revisionId: string; printId: string; matingPartId: string; cause: FitCause | null; remarks: string; draftKey: string; at: Date; by: { personId: string | null; name: string }; results: readonly NewFitResult[] },
): Promise<string | null> {
  const place = { shop_id: check.shopId, job_id: check.jobId, revision_id: check.revisionId };
  const [row] = await tx("fit_checks")
    .insert({ ...place, print_id: check.printId, mating_part_id: check.matingPartId, cause: check.cause, remarks: check.remarks, draft_key: check.draftKey, at: check.at, by_person_id: check.by.personId, by_name: check.by.name })
    .onConflict(["shop_id", "draft_key"])
    .ignore()
    .returning("id");
  if (!row) return null;
  await tx("fit_results").insert(
    check.results.map((result) => ({
      ...place,
      fit_check_id: row.id,
      characteristic_id: result.characteristicId,
      readings_mm: result.readingsMm,
      answers: result.answers,
      instrument_id: result.instrumentId,
      uncertainty_mm: result.uncertaintyMm,
      band_position_mm: result.bandPositionMm,
      band_width_mm: result.bandWidthMm,
    })),
  );
  return row.id as string;
}

export async function setFitCause(tx: Tx, id: string, cause: FitCause | null, remarks: string): Promise<void> {
  await tx("fit_checks").where({ id }).update({ cause, remarks });
}

/** An instrument as it is picked at the bench. */
export interface PickedInstrument {
  id: string;
  name: string;
  kind: string;
  uncertaintyMm: number;
  resolutionMm: number;
  trust: "calibrated" | "checked" | "unverified";
  calibratedUntil: string | null;
  checkedOn: string | null;
  checkedWith: string;
}

export async function listInstrumentsToPick(tx: Tx): Promise<PickedInstrument[]> {
  const rows = (await tx("instruments").whereNull("set_aside_at").orderBy("name")
    .select("id", "name", "kind", "uncertainty_mm", "resolution_mm", "trust", "checked_with", dateText(tx, "calibrated_until"), dateText(tx, "checked_on"))) as Array<{
    id: string; name: string; kind: string; uncertainty_mm: NumericText; resolution_mm: NumericText; trust: PickedInstrument["trust"]; checked_with: string; calibrated_until: string | null; checked_on: string | null;
  }>;
  return rows.map((row) => ({
    id: row.id,
    name: row.name,
    kind: row.kind,
    uncertaintyMm: Number(row.uncertainty_mm),
    resolutionMm: Number(row.resolution_mm),
    trust: row.trust,
    calibratedUntil: row.calibrated_until,
    checkedOn: row.checked_on,
    checkedWith: row.checked_with,
  }));
}
