import type { Tx } from "./scope.server.ts";

export interface Packet {
  decisionId: string;
  state: "being made" | "ready";
  attempts: number;
  lastError: string | null;
  key: string | null;
  pdfKey: string | null;
  sha256: string | null;
  bytes: number | null;
  madeAt: Date | null;
}

export async function findPacket(tx: Tx, decisionId: string): Promise<Packet | undefined> {
  const row = (await tx("packets").where({ decision_id: decisionId }).first()) as
    | { decision_id: string; state: Packet["state"]; attempts: number; last_error: string | null; key: string | null; pdf_key: string | null; sha256: string | null; bytes: string | null; made_at: Date | null }
    | undefined;
  return row && { decisionId: row.decision_id, state: row.state, attempts: row.attempts, lastError: row.last_error, key: row.key, pdfKey: row.pdf_key, sha256: row.sha256, bytes: row.bytes === null ? null : Number(row.bytes), madeAt: row.made_at };
}

export async function addPacket(tx: Tx, packet: { shopId: string; jobId: string; decisionId: string }): Promise<void> {
  await tx("packets").insert({ shop_id: packet.shopId, job_id: packet.jobId, decision_id: packet.decisionId });
}

export async function notePacketAttempt(tx: Tx, decisionId: string, error: string | null): Promise<void> {
  await tx("packets").where({ decision_id: decisionId }).update({ attempts: tx.raw("attempts + 1"), last_error: error });
}

export async function finishPacket(tx: Tx, decisionId: string, made: { key: string; pdfKey: string; sha256: string; bytes: number }): Promise<void> {
  await tx("packets").where({ decision_id: decisionId }).update({ state: "ready", last_error: null, key: made.key, pdf_key: made.pdfKey, sha256: made.sha256, bytes: made.bytes, made_at: tx.fn.now() });
}

export interface ByWhom {
  personId: string | null;
  guestLinkId: string | null;
  name: string;
  email: string | null;
}

export async function addFetch(tx: Tx, fetch: { shopId: string; jobId: string; decisionId: string; by: ByWhom }): Promise<void> {
  await tx("packet_fetches").insert({ shop_id: fetch.shopId, job_id: fetch.jobId, decision_id: fetch.decisionId, by_person_id: fetch.by.personId, by_guest_link_id: fetch.by.guestLinkId, by_name: fetch.by.name, by_email: fetch.by.email });
}

export interface Fetch {
  byName: string;
  byEmail: string | null;
  at: Date;
}

export async function listFetches(tx: Tx, decisionId: string): Promise<Fetch[]> {
  const rows = (await tx("packet_fetches").where({ decision_id: decisionId }).orderBy("at").select("by_name", "by_email", "at")) as Array<{ by_name: string; by_email: string | null; at: Date }>;
  return rows.map((row) => ({ byName: row.by_name, byEmail: row.by_email, at: row.at }));
}

export interface Acknowledgement {
  byName: string;
  byPersonId: string | null;
  byGuestLinkId: string | null;
  correctionId: string | null;
  recallId: string | null;
  at: Date;
}

export async function listAcknowledgements(tx: Tx, decisionId: string): Promise<Acknowledgement[]> {
  const rows = (await tx("acknowledgements").where({ decision_id: decisionId }).orderBy("at")) as Array<{ by_name: string; by_person_id: string | null; by_guest_link_id: string | null; correction_id: string | null; recall_id: string | null; at: Date }>;
  return rows.map((row) => ({ byName: row.by_name, byPersonId: row.by_person_id, byGuestLinkId: row.by_guest_link_id, correctionId: row.correction_id, recallId: row.recall_id, at: row.at }));
}

export async function addAcknowledgement(tx: Tx, acknowledgement: { shopId: string; jobId: string; decisionId: string; correctionId: string | null; recallId: string | null; by: ByWhom }): Promise<void> {
  await tx("acknowledgements").insert({
    shop_id: acknowledgement.shopId,
    job_id: acknowledgement.jobId,
    decision_id: acknowledgement.decisionId,
    correction_id: acknowledgement.correctionId,
    recall_id: acknowledgement.recallId,
    by_person_id: acknowledgement.by.personId,
    by_guest_link_id: acknowledgement.by.guestLinkId,
    by_name: acknowledgement.by.name,
  });
}

export interface Correction {
  id: string;
  text: string;
  byName: string;
  at: Date;
}

export async function listCorrections(tx: Tx, decisionId: string): Promise<Correction[]> {
  const rows = (await tx("corrections").where({ decision_id: decisionId }).orderBy("at")) as Array<{ id: string; text: string; by_name: string; at: Date }>;
  return rows.map((row) => ({ id: row.id, text: row.text, byName: row.by_name, at: row.at }));
}

export async function addCorrection(tx: Tx, correction: { shopId: string; jobId: string; decisionId: string; text: string; byPersonId: string; byName: string }): Promise<string> {
  const [row] = await tx("corrections").insert({ shop_id: correction.shopId, job_id: correction.jobId, decision_id: correction.decisionId, text: correction.text, by_person_id: correction.byPersonId, by_name: correction.byName }).returning("id");
  return row.id as string;
}

export interface Recall {
  id: string;
  reason: string;
  byName: string;
  at: Date;
}

export async function findRecall(tx: Tx, decisionId: string): Promise<Recall | undefined> {
  const row = (await tx("recalls").where({ decision_id: decisionId }).first()) as { id: string; reason: string; by_name: string; at: Date } | undefined;
  return row && { id: row.id, reason: row.reason, byName: row.by_name, at: row.at };
}

export async function addRecall(tx: Tx, recall: { shopId: string; jobId: string; decisionId: string; reason: string; byPersonId: string; byName: string }): Promise<string> {
  const [row] = await tx("recalls").insert({ shop_id: recall.shopId, job_id: recall.jobId, decision_id: recall.decisionId, reason: recall.reason, by_person_id: recall.byPersonId, by_name: recall.byName }).returning("id");
  return row.id as string;
}

/** Who has to hear of a release, a correction or a recall: machinists of the job, by account or by link. */
export async function listMachinistsOf(tx: Tx, jobId: string): Promise<Array<{ key: string; name: string; email: string }>> {
  const people = (await tx("job_shares")
    .join("people", "people.id", "job_shares.person_id")
    .join("memberships", (join) => void join.on("memberships.person_id", "people.id").andOn("memberships.shop_id", "job_shares.shop_id"))
    .where("job_shares.job_id", jobId)
    .whereNull("memberships.ended_at")
    .select("people.id", "people.name", "people.email")) as Array<{ id: string; name: string; email: string }>;
  const guests = (await tx("guest_links").where({ job_id: jobId, role: "machinist" }).whereNull("ended_at").select("id", "name", "email")) as Array<{ id: string; name: string; email: string }>;
  const byAddress = new Map([...people, ...guests].map(({ id, name, email }) => [email.toLowerCase(), { key: id, name, email }]));
  return [...byAddress.values()];
}
