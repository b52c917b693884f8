import { addCalculation, findStoredCalculation, listCalculations, removeCalculation } from "#app/data/calculations.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { findRevision, type Revision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { runCalculation } from "#app/engineering/registry.ts";
import { definingModel } from "./makeability.server.ts";

export type AttachResult = { ok: true; id: string } | { ok: false; reason: "sealed" } | { ok: false; reason: "inputs"; errors: Record<string, string[]> };

/**
 * Computes and attaches a calculation to a revision: by the same function as the page and the
 * command line, for the model as it is now, so that another model makes it stale.
 *
 * @param replaces a calculation of this revision whose place it takes
 */
export async function attachCalculation(viewer: Viewer, revisionId: string, input: { kind: string; title: string; inputs: Record<string, unknown>; replaces: string | null }): Promise<AttachResult> {
  const outcome = runCalculation(input.kind, input.inputs);
  if (!outcome.ok) return { ok: false, reason: "inputs", errors: outcome.errors };
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    if (input.replaces) orNotFound((await findStoredCalculation(tx, input.replaces))?.revisionId === revisionId ? true : null);
    if (input.replaces) await removeCalculation(tx, input.replaces);
    const id = await store(tx, viewer, revision, input.kind, input.title, outcome);
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "attached a calculation", { type: "calculation", id, jobId: revision.jobId }, { kind: input.kind, verdict: outcome.result.verdict, ordinal: revision.ordinal }));
    return { ok: true, id };
  });
}

async function store(tx: Tx, viewer: Viewer, revision: Revision, kind: string, title: string, outcome: Extract<ReturnType<typeof runCalculation>, { ok: true }>): Promise<string> {
  const part = orNotFound(await findPart(tx, revision.partId));
  const model = await definingModel(tx, revision.id);
  return addCalculation(tx, {
    shopId: viewer.shopId,
    jobId: revision.jobId,
    revisionId: revision.id,
    kind,
    title,
    inputs: outcome.inputs,
    result: outcome.result as unknown as Record<string, unknown>,
    verdict: outcome.result.verdict,
    modelSha256: model?.sha256 ?? null,
    hazard: part.requiredCalculations.find((required) => required.kind === kind)?.hazard ?? "none",
    byPersonId: viewer.personId,
    byName: viewer.name,
  });
}

export async function takeOffCalculation(viewer: Viewer, id: string): Promise<{ ok: true; revisionId: string } | { ok: false; reason: "sealed" }> {
  return inShop(viewer, async (tx) => {
    const calculation = orNotFound(await findStoredCalculation(tx, id));
    const revision = orNotFound(await findRevision(tx, calculation.revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    await removeCalculation(tx, id);
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revision.id });
    await writeLog(tx, logOf(viewer, "took a calculation off", { type: "calculation", id, jobId: revision.jobId }, { kind: calculation.kind }));
    return { ok: true, revisionId: revision.id };
  });
}

/**
 * Computes the calculations of a revision again when its model changed: same inputs, today's
 * function, today's model. A calculation that can't be computed any more stays, stale.
 */
export async function recomputeCalculations(tx: Tx, viewer: Viewer, revisionId: string): Promise<void> {
  const revision = orNotFound(await findRevision(tx, revisionId));
  if (revision.sealedAt) return;
  for (const calculation of await listCalculations(tx, revisionId)) {
    const outcome = runCalculation(calculation.kind, calculation.inputs);
    if (!outcome.ok) continue;
    await removeCalculation(tx, calculation.id);
    await store(tx, { ...viewer, name: calculation.byName }, revision, calculation.kind, calculation.title, outcome);
  }
}
