import type { GateRecords } from "#app/domain/gate-records.ts";
import type { GateLine } from "#app/domain/gate.ts";
import type { ReleaseManifest } from "#app/domain/manifest.ts";
import type { ProofWay } from "./sessions.server.ts";
import { dateText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type DecisionWord = "go" | "no-go" | "go with concession";

export interface Proposal {
  id: string;
  byPersonId: string;
  byName: string;
  meaning: string;
  provedBy: ProofWay;
  at: Date;
}

export async function findOpenProposal(tx: Tx, revisionId: string): Promise<Proposal | undefined> {
  const row = (await tx("proposals").where({ revision_id: revisionId }).whereNull("withdrawn_at").first()) as { id: string; by_person_id: string; by_name: string; meaning: string; proved_by: ProofWay; at: Date } | undefined;
  return row && { id: row.id, provedBy: row.proved_by, byPersonId: row.by_person_id, byName: row.by_name, meaning: row.meaning, at: row.at };
}

export async function addProposal(tx: Tx, proposal: { shopId: string; jobId: string; revisionId: string; byPersonId: string; byName: string; meaning: string; provedBy: ProofWay }): Promise<string> {
  const [row] = await tx("proposals")
    .insert({ shop_id: proposal.shopId, job_id: proposal.jobId, revision_id: proposal.revisionId, by_person_id: proposal.byPersonId, by_name: proposal.byName, meaning: proposal.meaning, proved_by: proposal.provedBy })
    .returning("id");
  return row.id as string;
}

export async function withdrawProposal(tx: Tx, revisionId: string): Promise<void> {
  await tx("proposals").where({ revision_id: revisionId }).whereNull("withdrawn_at").update({ withdrawn_at: tx.fn.now() });
}

export interface Decision {
  id: string;
  jobId: string;
  partId: string;
  revisionId: string;
  decision: DecisionWord;
  reason: string;
  letter: string | null;
  ruleVersion: string;
  recordsHash: string;
  records: GateRecords;
  lines: GateLine[];
  manifest: ReleaseManifest | null;
  proposedName: string | null;
  proposedAt: Date | null;
  byName: string;
  meaning: string;
  samePerson: boolean;
  at: Date;
}

interface DecisionRow {
  id: string;
  job_id: string;
  part_id: string;
  revision_id: string;
  decision: DecisionWord;
  reason: string;
  letter: string | null;
  rule_version: string;
  records_hash: string;
  records: GateRecords;
  lines: GateLine[];
  manifest: ReleaseManifest | null;
  proposed_name: string | null;
  proposed_at: Date | null;
  by_name: string;
  meaning: string;
  same_person: boolean;
  at: Date;
}

const toDecision = (row: DecisionRow): Decision => ({
  id: row.id,
  jobId: row.job_id,
  partId: row.part_id,
  revisionId: row.revision_id,
  decision: row.decision,
  reason: row.reason,
  letter: row.letter,
  ruleVersion: row.rule_version,
  recordsHash: row.records_hash,
  records: row.records,
  lines: row.lines,
  manifest: row.manifest,
  proposedName: row.proposed_name,
  proposedAt: row.proposed_at,
  byName: row.by_name,
  meaning: row.meaning,
  samePerson: row.same_person,
  at: row.at,
});

export async function findDecision(tx: Tx, id: string): Promise<Decision | undefined> {
  const row = (await tx("decisions").where({ id }).first()) as DecisionRow | undefined;
  return row && toDecision(row);
}

/** The decisions on a revision, newest first: perhaps some no-go before the go. */
export async function listDecisions(tx: Tx, revisionId: string): Promise<Decision[]> {
  return ((await tx("decisions").where({ revision_id: revisionId }).orderBy("at", "desc")) as DecisionRow[]).map(toDecision);
}

/** The letter of the part's latest release; null before the first. */
export async function findLatestLetter(tx: Tx, partId: string): Promise<string | null> {
  const row = (await tx("decisions").where({ part_id: partId }).whereNotNull("letter").orderBy("at", "desc").first("letter")) as { letter: string } | undefined;
  return row?.letter ?? null;
}

export interface NewDecision extends Omit<Decision, "at" | "proposedAt"> {
  shopId: string;
  proposalId: string | null;
  proposedAt: string | null;
  byPersonId: string;
  at: string;
}

export async function addDecision(tx: Tx, decision: NewDecision): Promise<void> {
  await tx("decisions").insert({
    id: decision.id,
    shop_id: decision.shopId,
    job_id: decision.jobId,
    part_id: decision.partId,
    revision_id: decision.revisionId,
    decision: decision.decision,
    reason: decision.reason,
    letter: decision.letter,
    rule_version: decision.ruleVersion,
    records_hash: decision.recordsHash,
    records: JSON.stringify(decision.records),
    lines: JSON.stringify(decision.lines),
    manifest: decision.manifest && JSON.stringify(decision.manifest),
    proposal_id: decision.proposalId,
    proposed_name: decision.proposedName,
    proposed_at: decision.proposedAt,
    by_person_id: decision.byPersonId,
    by_name: decision.byName,
    meaning: decision.meaning,
    same_person: decision.samePerson,
    at: decision.at,
  });
}

/** From here on the database refuses every change of what the decision rests on. */
export async function sealRevision(tx: Tx, revisionId: string, files: { shopId: string; jobId: string; fileIds: string[] }): Promise<void> {
  for (const fileId of new Set(files.fileIds)) {
    await tx("file_seals").insert({ shop_id: files.shopId, job_id: files.jobId, file_id: fileId, revision_id: revisionId });
  }
  await tx("revisions").where({ id: revisionId }).update({ sealed_at: tx.fn.now() });
}

export interface Concession {
  id: string;
  lines: string[];
  reason: string;
  limitPieces: number | null;
  limitUntil: string | null;
  outsideApproval: { name: string; organisation: string; reference: string; on: string } | null;
  byName: string;
  at: Date;
}

export async function listConcessions(tx: Tx, revisionId: string): Promise<Concession[]> {
  const rows = (await tx("concessions").where({ revision_id: revisionId }).whereNull("withdrawn_at").orderBy("at").select("id", "lines", "reason", "limit_pieces", "outside_approval", "by_name", "at", dateText(tx, "limit_until"))) as Array<{
    id: string; lines: string[]; reason: string; limit_pieces: number | null; limit_until: string | null; outside_approval: Concession["outsideApproval"]; by_name: string; at: Date;
  }>;
  return rows.map((row) => ({ id: row.id, lines: row.lines, reason: row.reason, limitPieces: row.limit_pieces, limitUntil: row.limit_until, outsideApproval: row.outside_approval, byName: row.by_name, at: row.at }));
}

export async function addConcession(
  tx: Tx,
  concession: { shopId: string; jobId: string; revisionId: string; byPersonId: string; byName: string } & Pick<Concession, "lines" | "reason" | "limitPieces" | "limitUntil" | "outsideApproval">,
): Promise<string> {
  const [row] = await tx("concessions")
    .insert({
      shop_id: concession.shopId,
      job_id: concession.jobId,
      revision_id: concession.revisionId,
      lines: concession.lines,
      reason: concession.reason,
      limit_pieces: concession.limitPieces,
      limit_until: concession.limitUntil,
      outside_approval: concession.outsideApproval && JSON.stringify(concession.outsideApproval),
      by_person_id: concession.byPersonId,
      by_name: concession.byName,
    })
    .returning("id");
  return row.id as string;
}

export async function withdrawConcession(tx: Tx, revisionId: string, id: string): Promise<boolean> {
  return (await tx("concessions").where({ id, revision_id: revisionId }).whereNull("withdrawn_at").update({ withdrawn_at: tx.fn.now() })) === 1;
}
