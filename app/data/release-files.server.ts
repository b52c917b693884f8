import type { Tx } from "./scope.server.ts";

export interface ReleaseFile {
  fileId: string;
  /** Where it stands in the packet. */
  path: string;
  key: string;
  bytes: number;
  sha256: string;
}

interface Row {
  file_id: string;
  role: string;
  name: string;
  key: string;
  bytes: string;
  sha256: string;
}

const folders: Record<string, string> = { step: "models", stl: "models", drawing: "drawings", photo: "photos", fit: "photos" };

/**
 * The files that a release consists of: models and drawings as they came, photos as the pictures
 * without EXIF that were made of them (the machine shop is told no places), and the drawing of
 * the model for the release sheet.
 */
export async function listReleaseFiles(tx: Tx, revisionId: string): Promise<ReleaseFile[]> {
  const { rows: originals } = await tx.raw<{ rows: Row[] }>(
    `select f.id as file_id, rf.role, f.name, f.key, f.bytes, f.sha256 from revision_files rf join files f on f.id = rf.file_id
     where rf.revision_id = ? and rf.removed_at is null and rf.role in ('step', 'stl', 'drawing') and f.state = 'stored' order by rf.role, f.id`,
    [revisionId],
  );
  const { rows: pictures } = await tx.raw<{ rows: Row[] }>(
    `select d.file_id, 'photo' as role, f.name, d.key, d.bytes, d.sha256 from derived_files d join files f on f.id = d.file_id
     where d.kind = 'screen' and f.kind = 'photo' and f.state = 'stored' and f.id in (
       select file_id from fit_photos where revision_id = ? union select file_id from revision_files where revision_id = ? and role = 'photo' and removed_at is null)
     order by f.created_at, f.id`,
    [revisionId, revisionId],
  );
  const { rows: drawn } = await tx.raw<{ rows: Row[] }>(
    `select d.file_id, 'drawn' as role, 'model.png' as name, d.key, d.bytes, d.sha256 from derived_files d join revision_files rf on rf.file_id = d.file_id
     where rf.revision_id = ? and rf.role = 'step' and rf.removed_at is null and d.kind = 'thumbnail'`,
    [revisionId],
  );
  const taken = new Set<string>();
  return [...originals, ...pictures.map((row) => ({ ...row, name: `${row.name.replace(/\.[^.]*$/, "")}.webp` })), ...drawn].map((row) => ({
    fileId: row.file_id,
    path: freePath(row.role === "drawn" ? "sheet" : folders[row.role]!, row.name, taken),
    key: row.key,
    bytes: Number(row.bytes),
    sha256: row.sha256,
  }));
}

/** A name every system can write, of which there is only one in its folder. */
function freePath(folder: string, name: string, taken: Set<string>): string {
  const safe = name.normalize("NFKD").replace(/[^A-Za-z0-9._-]+/g, "-").replace(/^[.-]+/, "") || "file";
  const dot = safe.lastIndexOf(".");
  const [stem, end] = dot > 0 ? [safe.slice(0, dot), safe.slice(dot)] : [safe, ""];
  let path = `${folder}/${stem}${end}`;
  for (let n = 2; taken.has(path.toLowerCase()); n++) path = `${folder}/${stem}-${n}${end}`;
  taken.add(path.toLowerCase());
  return path;
}
