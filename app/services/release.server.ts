import { randomUUID } from "node:crypto";
import { addConcession, addDecision, addProposal, findLatestLetter, findOpenProposal, sealRevision, withdrawConcession, withdrawProposal, type Concession } from "#app/data/decisions.server.ts";
import { notify } from "#app/data/events.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { findLogbookHead, logOf, writeLog } from "#app/data/logbook.server.ts";
import { addPacket } from "#app/data/packets.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { listReleaseFiles } from "#app/data/release-files.server.ts";
import { lockRevision, type Revision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import { describeChanges } from "#app/domain/changes.ts";
import { gateRecords, type GateRecords } from "#app/domain/gate-records.ts";
import type { Missing } from "#app/domain/gate.ts";
import type { ManifestSignature, ReleaseManifest } from "#app/domain/manifest.ts";
import { nextReleaseLetter } from "#app/domain/revision-letters.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { sendJob } from "#app/jobs/send.server.ts";
import { evaluateRevision, type EvaluatedRevision } from "./gate.server.ts";

/** A signature asks that the person signed in, or proved it again, within this time. */
export const proofLife = 5 * 60 * 1000;

export function provedLately(viewer: Viewer, now = Date.now()): boolean {
  return viewer.provedAt !== null && now - Date.parse(viewer.provedAt) < proofLife;
}

export const meanings = {
  proposes: "I put this revision to the gate: its records are complete as far as I know.",
  decides: "I decide that this revision may be cut from solid.",
  both: "I put this revision to the gate and decide, alone, that it may be cut from solid.",
  refuses: "I decide that this revision may not be cut.",
} as const;

/** Guests don't sign: their link proves a device, not a person. */
function signingWay(way: Viewer["provedBy"]): ManifestSignature["by"] {
  if (way === null || way === "guest link") throw new TypeError("only people with an account sign");
  return way;
}

export type GateRefusal =
  | { ok: false; reason: "prove" }
  | { ok: false; reason: "released" }
  | { ok: false; reason: "not-proposable"; missing: string[] }
  | { ok: false; reason: "not-clear"; missing: Missing[] }
  | { ok: false; reason: "changed"; changes: string[] };

async function lockOpen(tx: Tx, revisionId: string): Promise<{ revision: Revision; evaluated: EvaluatedRevision } | null> {
  const revision = orNotFound(await lockRevision(tx, revisionId));
  if (revision.sealedAt) return null;
  return { revision, evaluated: orNotFound(await evaluateRevision(tx, revisionId)) };
}

/** Puts a revision to the gate, signed. It may still lack what others supply; it must have a model. */
export async function proposeRevision(viewer: Viewer, revisionId: string): Promise<{ ok: true } | GateRefusal> {
  if (!provedLately(viewer)) return { ok: false, reason: "prove" };
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    const { revision, evaluated } = open;
    const blocked = evaluated.result.blocked.map(({ what }) => what);
    if (!evaluated.records.models.some(({ kind }) => kind === "step")) blocked.push("there is no STEP yet");
    if (blocked.length > 0) return { ok: false, reason: "not-proposable", missing: blocked };
    if (await findOpenProposal(tx, revisionId)) return { ok: true };
    await addProposal(tx, { shopId: viewer.shopId, jobId: revision.jobId, revisionId, byPersonId: viewer.personId!, byName: viewer.name, meaning: meanings.proposes, provedBy: viewer.provedBy! });
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "put a revision to the gate", { type: "revision", id: revisionId, jobId: revision.jobId }, { ordinal: revision.ordinal, recordsHash: evaluated.result.recordsHash }));
    return { ok: true };
  });
}

/** Takes a revision back from the gate. */
export async function withdrawFromGate(viewer: Viewer, revisionId: string): Promise<{ ok: true } | GateRefusal> {
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    await withdrawProposal(tx, revisionId);
    await notify(tx, { shopId: viewer.shopId, jobId: open.revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "took a revision back from the gate", { type: "revision", id: revisionId, jobId: open.revision.jobId }));
    return { ok: true };
  });
}

/** Concedes lines that are not met, with one reason and a limit; signed like a decision. */
export async function concedeLines(
  viewer: Viewer,
  revisionId: string,
  concession: Pick<Concession, "lines" | "reason" | "limitPieces" | "limitUntil" | "outsideApproval">,
): Promise<{ ok: true } | GateRefusal> {
  if (!provedLately(viewer)) return { ok: false, reason: "prove" };
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    const { jobId } = open.revision;
    const id = await addConcession(tx, { shopId: viewer.shopId, jobId, revisionId, byPersonId: viewer.personId!, byName: viewer.name, ...concession });
    await notify(tx, { shopId: viewer.shopId, jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "conceded gate lines", { type: "concession", id, jobId }, { lines: concession.lines, reason: concession.reason, pieces: concession.limitPieces, until: concession.limitUntil }));
    return { ok: true };
  });
}

export async function takeBackConcession(viewer: Viewer, revisionId: string, concessionId: string): Promise<{ ok: true } | GateRefusal> {
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    if (!(await withdrawConcession(tx, revisionId, concessionId))) orNotFound(null);
    await notify(tx, { shopId: viewer.shopId, jobId: open.revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "took a concession back", { type: "concession", id: concessionId, jobId: open.revision.jobId }));
    return { ok: true };
  });
}

/** Sends a revision back, with a reason. */
export async function refuseRevision(viewer: Viewer, revisionId: string, reason: string): Promise<{ ok: true } | GateRefusal> {
  if (!provedLately(viewer)) return { ok: false, reason: "prove" };
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    const { revision, evaluated } = open;
    const proposal = await findOpenProposal(tx, revisionId);
    await withdrawProposal(tx, revisionId);
    await addDecision(tx, {
      ...common(viewer, revision, evaluated),
      decision: "no-go",
      reason,
      letter: null,
      manifest: null,
      proposalId: proposal?.id ?? null,
      proposedName: proposal?.byName ?? null,
      proposedAt: proposal?.at.toISOString() ?? null,
      meaning: meanings.refuses,
      samePerson: proposal?.byPersonId === viewer.personId,
    });
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "decided no-go", { type: "revision", id: revisionId, jobId: revision.jobId }, { ordinal: revision.ordinal, reason }));
    return { ok: true };
  });
}

function common(viewer: Viewer, revision: Revision, { records, result }: EvaluatedRevision) {
  return {
    id: randomUUID(),
    shopId: viewer.shopId,
    jobId: revision.jobId,
    partId: revision.partId,
    revisionId: revision.id,
    ruleVersion: result.ruleVersion,
    recordsHash: result.recordsHash,
    records,
    lines: result.lines,
    byPersonId: viewer.personId!,
    byName: viewer.name,
    at: new Date().toISOString(),
  };
}

/** What changed between the records that the owner saw and those of now, in sentences. */
function changesSince(seen: unknown, now: GateRecords): string[] {
  const before = gateRecords.safeParse(seen);
  return before.success ? describeChanges(before.data, now).map(({ what }) => what) : ["the records are not the ones that this page showed"];
}

/**
 * Releases a revision to be cut. In one transaction the revision is locked, everything is read
 * and judged again and compared with what the owner saw; then decision, letter and manifest are
 * written and the records sealed. If anything changed, nothing is released and the changes come
 * back. Of two owners at the same moment one releases, the other finds it released.
 *
 * @param seen the hash, and the records, that the owner's page showed
 */
export async function releaseRevision(viewer: Viewer, revisionId: string, seen: { hash: string; records: unknown; reason: string }): Promise<{ ok: true; decisionId: string; letter: string } | GateRefusal> {
  if (!provedLately(viewer)) return { ok: false, reason: "prove" };
  return inShop(viewer, async (tx) => {
    const open = await lockOpen(tx, revisionId);
    if (!open) return { ok: false, reason: "released" };
    const { revision, evaluated } = open;
    const { records, result } = evaluated;
    if (result.recordsHash !== seen.hash) return { ok: false, reason: "changed", changes: changesSince(seen.records, records) };
    if (result.verdict !== "go") {
      const missing = [...result.blocked, ...result.lines.filter(({ state }) => state === "open" || state === "failed").flatMap((line) => line.missing)];
      return { ok: false, reason: "not-clear", missing };
    }

    const proposal = await findOpenProposal(tx, revisionId);
    const samePerson = proposal === undefined || proposal.byPersonId === viewer.personId;
    const base = common(viewer, revision, evaluated);
    const decision = result.lines.some(({ state }) => state === "conceded") ? "go with concession" : "go";
    const letter = nextReleaseLetter(await findLatestLetter(tx, revision.partId));
    const meaning = samePerson ? meanings.both : meanings.decides;
    const decided: ManifestSignature = { part: samePerson ? "proposes and decides" : "decides", name: viewer.name, at: base.at, meaning, by: signingWay(viewer.provedBy) };
    const signatures: ManifestSignature[] = samePerson ? [decided] : [{ part: "proposes", name: proposal.byName, at: proposal.at.toISOString(), meaning: proposal.meaning, by: signingWay(proposal.provedBy) }, decided];

    const part = orNotFound(await findPart(tx, revision.partId));
    const job = orNotFound(await findJob(tx, revision.jobId));
    const files = await listReleaseFiles(tx, revisionId);
    const manifest: ReleaseManifest = {
      format: "spotblue release manifest",
      formatVersion: 1,
      shop: { id: viewer.shopId, name: viewer.shopName },
      job: { id: job.id, number: job.number, title: job.title },
      part: { id: part.id, name: part.name, number: part.number, material: part.materialName, quantity: part.quantity },
      revision: { id: revision.id, ordinal: revision.ordinal, letter, reason: revision.reason },
      decision: { id: base.id, decision, at: base.at, samePerson },
      signatures,
      gate: { ruleVersion: result.ruleVersion, recordsHash: result.recordsHash, lines: result.lines },
      records,
      files: files.map(({ path, key, bytes, sha256 }) => ({ path, key, bytes, sha256 })),
      logbook: await findLogbookHead(tx, viewer.shopId),
    };
    await addDecision(tx, {
      ...base,
      decision,
      reason: seen.reason,
      letter,
      manifest,
      proposalId: proposal?.id ?? null,
      proposedName: proposal?.byName ?? null,
      proposedAt: proposal?.at.toISOString() ?? null,
      meaning,
      samePerson,
    });
    await addPacket(tx, { shopId: viewer.shopId, jobId: job.id, decisionId: base.id });
    await sealRevision(tx, revisionId, { shopId: viewer.shopId, jobId: job.id, fileIds: [...files.map(({ fileId }) => fileId), ...records.photos.map(({ id }) => id)] });
    await sendJob(tx, "make-packet", { shopId: viewer.shopId, id: base.id });
    await notify(tx, { shopId: viewer.shopId, jobId: job.id, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, `decided ${decision}`, { type: "revision", id: revisionId, jobId: job.id }, { ordinal: revision.ordinal, letter, recordsHash: result.recordsHash, samePerson }));
    return { ok: true, decisionId: base.id, letter };
  });
}
