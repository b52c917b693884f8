import { findDecision, type Decision } from "#app/data/decisions.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addAcknowledgement, addCorrection, addFetch, addRecall, findPacket, findRecall, listAcknowledgements, listCorrections, listMachinistsOf, type ByWhom } from "#app/data/packets.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { queueMail } from "./mail.server.ts";
import { store } from "./store.server.ts";

const byWhom = (viewer: Viewer): ByWhom => ({ personId: viewer.personId, guestLinkId: viewer.guestLinkId, name: viewer.name, email: viewer.email });
const is = (viewer: Viewer) => (one: { byPersonId: string | null; byGuestLinkId: string | null }) => (viewer.personId !== null ? one.byPersonId === viewer.personId : one.byGuestLinkId === viewer.guestLinkId);

/** A released decision in the viewer's scope, or a 404. */
export async function findRelease(tx: Tx, id: string): Promise<Decision> {
  const decision = orNotFound(await findDecision(tx, id));
  return orNotFound(decision.letter === null ? null : decision);
}

/** A fresh address of the packet or its sheet, and the entry that this viewer fetched it; null while it is being made. */
export async function fetchPacket(viewer: Viewer, decisionId: string, what: "packet" | "sheet"): Promise<string | null> {
  const found = await inShop(viewer, async (tx) => {
    const decision = await findRelease(tx, decisionId);
    const packet = await findPacket(tx, decisionId);
    if (packet?.state !== "ready" || !packet.key || !packet.pdfKey) return null;
    if (what === "packet") {
      await addFetch(tx, { shopId: viewer.shopId, jobId: decision.jobId, decisionId, by: byWhom(viewer) });
      await notify(tx, { shopId: viewer.shopId, jobId: decision.jobId, topic: "packet", id: decisionId });
      await writeLog(tx, logOf(viewer, "fetched a packet", { type: "decision", id: decisionId, jobId: decision.jobId }, { sha256: packet.sha256 }));
    }
    return { packet, decision };
  });
  if (!found) return null;
  const { part, revision } = found.decision.manifest!;
  const stem = `${part.number}-${revision.letter}`.replace(/[^A-Za-z0-9.-]+/g, "-");
  return what === "packet"
    ? store().presignGet(found.packet.key!, { seconds: 60, filename: `${stem}.zip`, contentType: "application/zip", inline: false })
    : store().presignGet(found.packet.pdfKey!, { seconds: 60, filename: `${stem}.pdf`, contentType: "application/pdf", inline: true });
}

/** Says that the packet, each correction of it and its recall were received. What was acknowledged already stays so. */
export async function acknowledge(viewer: Viewer, decisionId: string): Promise<void> {
  await inShop(viewer, async (tx) => {
    const decision = await findRelease(tx, decisionId);
    const mine = (await listAcknowledgements(tx, decisionId)).filter(is(viewer));
    const open: Array<{ correctionId: string | null; recallId: string | null }> = [{ correctionId: null, recallId: null }];
    for (const { id } of await listCorrections(tx, decisionId)) open.push({ correctionId: id, recallId: null });
    const recall = await findRecall(tx, decisionId);
    if (recall) open.push({ correctionId: null, recallId: recall.id });
    const missing = open.filter((one) => !mine.some(({ correctionId, recallId }) => correctionId === one.correctionId && recallId === one.recallId));
    for (const one of missing) await addAcknowledgement(tx, { shopId: viewer.shopId, jobId: decision.jobId, decisionId, ...one, by: byWhom(viewer) });
    if (missing.length === 0) return;
    await notify(tx, { shopId: viewer.shopId, jobId: decision.jobId, topic: "packet", id: decisionId });
    await writeLog(tx, logOf(viewer, "acknowledged a packet", { type: "decision", id: decisionId, jobId: decision.jobId }, { items: missing.length }));
  });
}

/** Answers a mistake in a released packet: appended, and sent to everyone who has the packet or may fetch it. */
export async function correctPacket(viewer: Viewer, decisionId: string, text: string): Promise<void> {
  await inShop(viewer, async (tx) => {
    const decision = await findRelease(tx, decisionId);
    const id = await addCorrection(tx, { shopId: viewer.shopId, jobId: decision.jobId, decisionId, text, byPersonId: viewer.personId!, byName: viewer.name });
    await tellHolders(tx, viewer, decision, `correction:${id}`, "correction to", ["A correction was added to a packet that you have:", text, "Open it and acknowledge the correction."]);
    await notify(tx, { shopId: viewer.shopId, jobId: decision.jobId, topic: "packet", id: decisionId });
    await writeLog(tx, logOf(viewer, "corrected a packet", { type: "decision", id: decisionId, jobId: decision.jobId }, { text }));
  });
}

/** Calls a released packet back: nothing more may be cut from it. Everyone who fetched it is told. */
export async function recallPacket(viewer: Viewer, decisionId: string, reason: string): Promise<{ ok: boolean }> {
  return inShop(viewer, async (tx) => {
    const decision = await findRelease(tx, decisionId);
    if (await findRecall(tx, decisionId)) return { ok: false };
    const id = await addRecall(tx, { shopId: viewer.shopId, jobId: decision.jobId, decisionId, reason, byPersonId: viewer.personId!, byName: viewer.name });
    await tellHolders(tx, viewer, decision, `recall:${id}`, "RECALLED:", ["Stop. This packet was recalled: cut nothing more from it.", reason, "Open it and acknowledge the recall."]);
    await notify(tx, { shopId: viewer.shopId, jobId: decision.jobId, topic: "packet", id: decisionId });
    await writeLog(tx, logOf(viewer, "recalled a packet", { type: "decision", id: decisionId, jobId: decision.jobId }, { reason }));
    return { ok: true };
  });
}

async function tellHolders(tx: Tx, viewer: Viewer, decision: Decision, event: string, word: string, paragraphs: string[]): Promise<void> {
  const { part, revision } = decision.manifest!;
  const shop = orNotFound(await findShop(tx));
  const fetched = (await tx("packet_fetches").where({ decision_id: decision.id }).whereNotNull("by_email").distinct("by_email as email")) as Array<{ email: string }>;
  const addresses = new Set([...(await listMachinistsOf(tx, decision.jobId)), ...fetched].map(({ email }) => email.toLowerCase()));
  for (const address of addresses) {
    await queueMail(tx, {
      shopId: viewer.shopId,
      onceKey: `${event}:${address}`,
      to: address,
      replyTo: shop.replyTo,
      subject: `${word} ${part.name} ${revision.letter}`,
      paragraphs,
      action: { label: "Open the packet", url: `${env.APP_ORIGIN}/packets/${decision.id}` },
    });
  }
}
