import { addGuestLink, endGuestLink, findGuestLinkByToken, findShopOfGuestLink, shareJob, takeGuestLink } from "#app/data/guest-links.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { inShop, orNotFound, outsideShops } from "#app/data/scope.server.ts";
import { endGuestSessions, openSession } from "#app/data/sessions.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { housekeeper, type Viewer } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { queueMail } from "./mail.server.ts";
import { hashToken, newToken } from "./secrets.server.ts";

const day = 24 * 60 * 60 * 1000;
/** A link that nobody pressed goes stale; the session that it opens lasts as long as a part usually takes. */
const linkLife = 14 * day;
const guestSessionLife = 60 * day;

/** Mails somebody outside a link that opens just this job, without an account. */
export async function sendGuestLink(viewer: Viewer, jobId: string, guest: { role: "customer" | "machinist"; name: string; email: string }): Promise<void> {
  await inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, jobId));
    const shop = orNotFound(await findShop(tx));
    const { token, tokenHash } = newToken();
    const id = await addGuestLink(tx, { shopId: viewer.shopId, jobId, ...guest, tokenHash, createdBy: viewer.personId, expiresAt: new Date(Date.now() + linkLife) });
    await queueMail(tx, {
      shopId: viewer.shopId,
      onceKey: `guest-link:${id}`,
      to: guest.email,
      replyTo: shop.replyTo,
      subject: `${shop.name}: ${job.title}`,
      paragraphs: [
        `${shop.name} opened the job “${job.title}” for you${guest.role === "customer" ? ": see how it stands, and say what you think" : ": look at the model, and say whether it can be made"}.`,
        "The link opens it on one device, within 14 days. No account is needed.",
      ],
      action: { label: "Open the job", url: `${env.APP_ORIGIN}/g/${token}` },
    });
    await writeLog(tx, logOf(viewer, "sent a guest link", { type: "guest-link", id, jobId }, { to: guest.name, role: guest.role }));
  });
}

/** What the page of a link says before its button is pressed; null when the link opens nothing (any more). */
export async function readGuestLink(token: string): Promise<{ name: string; shopName: string; jobTitle: string; exchanged: boolean } | null> {
  const tokenHash = hashToken(token);
  const shopId = await outsideShops((tx) => findShopOfGuestLink(tx, tokenHash));
  if (!shopId) return null;
  return inShop(housekeeper(shopId), async (tx) => {
    const link = await findGuestLinkByToken(tx, tokenHash);
    if (!link || link.endedAt || link.expiresAt < new Date()) return null;
    const job = orNotFound(await findJob(tx, link.jobId));
    return { name: link.name, shopName: orNotFound(await findShop(tx)).name, jobTitle: job.title, exchanged: link.exchangedAt !== null };
  });
}

/** Exchanges a link, once, for a session on this device that opens just its job. */
export async function exchangeGuestLink(token: string, userAgent: string): Promise<{ token: string; expiresAt: Date; jobId: string; role: "customer" | "machinist" } | null> {
  const tokenHash = hashToken(token);
  const shopId = await outsideShops((tx) => findShopOfGuestLink(tx, tokenHash));
  if (!shopId) return null;
  return inShop(housekeeper(shopId), async (tx) => {
    const link = await findGuestLinkByToken(tx, tokenHash);
    if (!link || !(await takeGuestLink(tx, link.id))) return null;
    const session = newToken();
    const expiresAt = new Date(Date.now() + guestSessionLife);
    await openSession(tx, { tokenHash: session.tokenHash, personId: null, guestLinkId: link.id, shopId, expiresAt, userAgent, way: "guest link" });
    await writeLog(tx, { shopId, actorId: link.id, actor: link.name, action: "opened a guest link", subjectType: "guest-link", subjectId: link.id, jobId: link.jobId, detail: { role: link.role } });
    return { token: session.token, expiresAt, jobId: link.jobId, role: link.role };
  });
}

/** Ends a link and every session it opened, at once. */
export async function revokeGuestLink(viewer: Viewer, jobId: string, linkId: string): Promise<void> {
  await inShop(viewer, async (tx) => {
    if (!(await endGuestLink(tx, jobId, linkId))) orNotFound(null);
    await endGuestSessions(tx, linkId);
    await writeLog(tx, logOf(viewer, "ended a guest link", { type: "guest-link", id: linkId, jobId }));
  });
}

export async function setShared(viewer: Viewer, jobId: string, personId: string, shared: boolean): Promise<void> {
  await inShop(viewer, async (tx) => {
    orNotFound(await findJob(tx, jobId));
    await shareJob(tx, { shopId: viewer.shopId, jobId, personId }, shared);
    await writeLog(tx, logOf(viewer, shared ? "shared a job with a machinist" : "stopped sharing a job", { type: "job", id: jobId, jobId }, { personId }));
  });
}
