import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import type { Tx } from "./scope.server.ts";

export type FileKind = "step" | "stl" | "photo" | "pdf";
export type FileState = "uploading" | "checking" | "stored" | "refused" | "abandoned";

/** What an upload is for; it is linked there when its bytes are stored and verified. */
export type UploadTarget =
  | { to: "revision"; id: string }
  | { to: "mating-part"; id: string }
  | { to: "fit-check"; id: string; characteristicId: string | null }
  | { to: "answer"; id: string };

export interface StoredFile {
  id: string;
  jobId: string;
  kind: FileKind;
  name: string;
  key: string;
  uploadId: string | null;
  partBytes: number | null;
  bytes: number;
  sha256: string;
  mediaType: string;
  unit: "mm" | "in" | null;
  state: FileState;
  refusal: string | null;
  target: UploadTarget;
  uploadedBy: string | null;
  uploadedByName: string;
  createdAt: Date;
  storedAt: Date | null;
}

interface FileRow {
  id: string;
  job_id: string;
  kind: FileKind;
  name: string;
  key: string;
  upload_id: string | null;
  part_bytes: number | null;
  bytes: string;
  sha256: string;
  media_type: string;
  unit: "mm" | "in" | null;
  state: FileState;
  refusal: string | null;
  target: UploadTarget;
  uploaded_by: string | null;
  uploaded_by_name: string;
  created_at: Date;
  stored_at: Date | null;
}

export function toFile(row: FileRow): StoredFile {
  return {
    id: row.id,
    jobId: row.job_id,
    kind: row.kind,
    name: row.name,
    key: row.key,
    uploadId: row.upload_id,
    partBytes: row.part_bytes,
    bytes: Number(row.bytes),
    sha256: row.sha256,
    mediaType: row.media_type,
    unit: row.unit,
    state: row.state,
    refusal: row.refusal,
    target: row.target,
    uploadedBy: row.uploaded_by,
    uploadedByName: row.uploaded_by_name,
    createdAt: row.created_at,
    storedAt: row.stored_at,
  };
}

export async function findFile(tx: Tx, id: string): Promise<StoredFile | undefined> {
  const row = (await tx("files").where({ id }).first()) as FileRow | undefined;
  return row && toFile(row);
}

/** The file, locked until the transaction ends. */
export async function lockFile(tx: Tx, id: string): Promise<StoredFile | undefined> {
  const row = (await tx("files").where({ id }).forUpdate().first()) as FileRow | undefined;
  return row && toFile(row);
}

/** An upload of the same bytes to the same place that was begun and not finished. */
export async function findUnfinishedUpload(tx: Tx, upload: { jobId: string; sha256: string; bytes: number; target: UploadTarget }): Promise<StoredFile | undefined> {
  const row = (await tx("files")
    .where({ job_id: upload.jobId, sha256: upload.sha256, bytes: upload.bytes, state: "uploading" })
    .whereRaw("target = ?::jsonb", [JSON.stringify(upload.target)])
    .first()) as FileRow | undefined;
  return row && toFile(row);
}

export interface NewFile {
  id: string;
  shopId: string;
  jobId: string;
  kind: FileKind;
  name: string;
  key: string;
  uploadId: string;
  partBytes: number;
  bytes: number;
  sha256: string;
  mediaType: string;
  unit: "mm" | "in" | null;
  target: UploadTarget;
  uploadedBy: string | null;
  uploadedByName: string;
}

export async function addFile(tx: Tx, file: NewFile): Promise<void> {
  await tx("files").insert({
    id: file.id,
    shop_id: file.shopId,
    job_id: file.jobId,
    kind: file.kind,
    name: file.name,
    key: file.key,
    upload_id: file.uploadId,
    part_bytes: file.partBytes,
    bytes: file.bytes,
    sha256: file.sha256,
    media_type: file.mediaType,
    unit: file.unit,
    target: JSON.stringify(file.target),
    uploaded_by: file.uploadedBy,
    uploaded_by_name: file.uploadedByName,
  });
}

export async function setFileState(tx: Tx, id: string, state: FileState, refusal: string | null = null): Promise<void> {
  await tx("files").where({ id }).update({ state, refusal, ...(state === "stored" ? { stored_at: tx.fn.now() } : {}) });
}

/** What the stored bytes turned out to be: the name a file comes with is not asked. */
export async function setFileKind(tx: Tx, id: string, kind: FileKind, mediaType: string): Promise<void> {
  await tx("files").where({ id }).update({ kind, media_type: mediaType });
}

export async function setFileUnit(tx: Tx, id: string, unit: "mm" | "in"): Promise<void> {
  await tx("files").where({ id }).update({ unit });
}

export async function listStaleUploads(tx: Tx, before: Date): Promise<StoredFile[]> {
  const rows = (await tx("files").where({ state: "uploading" }).where("created_at", "<", before)) as FileRow[];
  return rows.map(toFile);
}

export type MeasureState = "waiting" | "running" | "done" | "failed";

export interface Measure {
  fileId: string;
  state: MeasureState;
  /** 0 to 1. */
  progress: number;
  step: string;
  document: MeasureDocument | null;
  reason: string | null;
}

export interface ModelFile extends StoredFile {
  role: "step" | "stl" | "photo" | "drawing";
  measure: Measure | null;
  /** Kinds of derived files that are ready. */
  derived: string[];
}

/** The files of a revision that belong to it now, each with its measure and what was derived from it. */
export async function listRevisionFiles(tx: Tx, revisionId: string): Promise<ModelFile[]> {
  const rows = (await tx("revision_files")
    .join("files", "files.id", "revision_files.file_id")
    .leftJoin("measures", "measures.file_id", "files.id")
    .where("revision_files.revision_id", revisionId)
    .whereNull("revision_files.removed_at")
    .orderBy("revision_files.created_at")
    .select("files.*", "revision_files.role", "measures.state as measure_state", "measures.progress as measure_progress", "measures.step", "measures.document", "measures.reason")
    .select(tx.raw("(select coalesce(array_agg(d.kind), '{}') from derived_files d where d.file_id = files.id) as derived"))) as Array<
    FileRow & { role: ModelFile["role"]; measure_state: MeasureState | null; measure_progress: string; step: string; document: MeasureDocument | null; reason: string | null; derived: string[] }
  >;
  return rows.map((row) => ({
    ...toFile(row),
    role: row.role,
    derived: row.derived,
    measure: row.measure_state && { fileId: row.id, state: row.measure_state, progress: Number(row.measure_progress), step: row.step, document: row.document, reason: row.reason },
  }));
}

/** Uploads to a revision that are under way, being checked, or were refused of late. */
export async function listUploadsTo(tx: Tx, target: UploadTarget): Promise<StoredFile[]> {
  const rows = (await tx("files")
    .whereRaw("target @> ?::jsonb", [JSON.stringify({ to: target.to, id: target.id })])
    .whereIn("state", ["uploading", "checking", "refused"])
    .where("created_at", ">", tx.raw("now() - interval '7 days'"))
    .orderBy("created_at")) as FileRow[];
  return rows.map(toFile);
}

export async function linkRevisionFile(tx: Tx, link: { shopId: string; jobId: string; revisionId: string; fileId: string; role: ModelFile["role"] }): Promise<void> {
  // A revision has one STEP and one STL for printing; a new one takes the place of the old, which is kept.
  if (link.role === "step" || link.role === "stl") {
    await tx("revision_files").where({ revision_id: link.revisionId, role: link.role }).whereNull("removed_at").update({ removed_at: tx.fn.now() });
  }
  await tx("revision_files")
    .insert({ shop_id: link.shopId, job_id: link.jobId, revision_id: link.revisionId, file_id: link.fileId, role: link.role })
    .onConflict(["shop_id", "revision_id", "file_id"])
    .merge({ removed_at: null });
}

export async function unlinkRevisionFile(tx: Tx, revisionId: string, fileId: string): Promise<boolean> {
  return (await tx("revision_files").where({ revision_id: revisionId, file_id: fileId }).whereNull("removed_at").update({ removed_at: tx.fn.now() })) === 1;
}

export async function putMeasure(tx: Tx, measure: { shopId: string; jobId: string; fileId: string; state: MeasureState; progress?: number; step?: string; document?: MeasureDocument | null; reason?: string | null }): Promise<void> {
  const values = {
    state: measure.state,
    progress: measure.progress ?? 0,
    step: measure.step ?? "",
    document: measure.document ? JSON.stringify(measure.document) : null,
    reason: measure.reason ?? null,
    finished_at: measure.state === "done" || measure.state === "failed" ? tx.fn.now() : null,
  };
  await tx("measures").insert({ shop_id: measure.shopId, job_id: measure.jobId, file_id: measure.fileId, ...values }).onConflict(["shop_id", "file_id"]).merge(values);
}

export type DerivedKind = "view-mesh" | "customer-mesh" | "thumbnail" | "screen";

export interface DerivedFile {
  fileId: string;
  kind: DerivedKind;
  key: string;
  bytes: number;
  sha256: string;
  mediaType: string;
  width: number | null;
  height: number | null;
  detail: Record<string, unknown>;
}

export async function putDerivedFile(tx: Tx, derived: Omit<DerivedFile, "width" | "height" | "detail"> & { shopId: string; jobId: string; width?: number; height?: number; detail?: Record<string, unknown> }): Promise<void> {
  const values = { key: derived.key, bytes: derived.bytes, sha256: derived.sha256, media_type: derived.mediaType, width: derived.width ?? null, height: derived.height ?? null, detail: JSON.stringify(derived.detail ?? {}) };
  await tx("derived_files").insert({ shop_id: derived.shopId, job_id: derived.jobId, file_id: derived.fileId, kind: derived.kind, ...values }).onConflict(["shop_id", "file_id", "kind"]).merge(values);
}

export async function findDerivedFile(tx: Tx, fileId: string, kind: DerivedKind): Promise<DerivedFile | undefined> {
  const row = (await tx("derived_files").where({ file_id: fileId, kind }).first()) as { file_id: string; kind: DerivedKind; key: string; bytes: string; sha256: string; media_type: string; width: number | null; height: number | null; detail: Record<string, unknown> } | undefined;
  return row && { fileId: row.file_id, kind: row.kind, key: row.key, bytes: Number(row.bytes), sha256: row.sha256, mediaType: row.media_type, width: row.width, height: row.height, detail: row.detail };
}
