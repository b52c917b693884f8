import { listRevisionFiles } from "#app/data/files.server.ts";
import type { Tx } from "#app/data/scope.server.ts";

/** The model of a revision that can be drawn now: the STEP, else the STL; null while there is no view of it. */
export async function findViewModel(tx: Tx, revisionId: string): Promise<{ fileId: string; closed: boolean; pictured: boolean } | null> {
  const files = (await listRevisionFiles(tx, revisionId)).filter(({ derived, state }) => state === "stored" && derived.includes("view-mesh"));
  const model = files.find(({ role }) => role === "step") ?? files.find(({ role }) => role === "stl");
  if (!model) return null;
  const document = model.measure?.document;
  return { fileId: model.id, closed: document?.solid ? document.solid.valid : (document?.mesh?.closed ?? false), pictured: model.derived.includes("thumbnail") };
}
