import { addCallout, addCalloutReply, findCallout, setCalloutAssignee, setCalloutClosed, type Callout, type Visibility } from "#app/data/callouts.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { listMembers, type Member } from "#app/data/memberships.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import { findPhotoPlace } from "#app/data/shared.server.ts";
import { viewerCan, type Viewer } from "#app/domain/viewer.ts";

/** Customers write to the shop: what they put is always theirs to see, and never inside the shop only. */
const isCustomerOnly = (viewer: Viewer) => !viewerCan(viewer, "callout:internal");

export interface CalloutInput {
  body: string;
  visibility: Visibility;
  assigneeId: string | null;
}

export type AddCallout = { ok: true; calloutId: string; number: number } | { ok: false; reason: "no-revision" | "no-such-person" };

/** Puts a callout on a spot of a photo. Possible after a release too: a conversation goes on. */
export async function putPhotoCallout(viewer: Viewer, fileId: string, spot: { x: number; y: number }, input: CalloutInput): Promise<AddCallout> {
  return inShop(viewer, async (tx) => {
    const place = orNotFound(await findPhotoPlace(tx, viewer, fileId));
    if (place.revisionId === null) return { ok: false, reason: "no-revision" };
    return put(tx, viewer, { revisionId: place.revisionId, jobId: place.jobId, spot: { fileId, ...spot } }, input);
  });
}

/** Puts a callout on a point of the model, in its own coordinates. */
export async function putModelCallout(viewer: Viewer, revisionId: string, pointMm: readonly [number, number, number], input: CalloutInput): Promise<AddCallout> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    return put(tx, viewer, { revisionId, jobId: revision.jobId, spot: { pointMm } }, input);
  });
}

type Spot = Parameters<typeof addCallout>[1]["spot"];

async function put(tx: Tx, viewer: Viewer, on: { revisionId: string; jobId: string; spot: Spot }, input: CalloutInput): Promise<AddCallout> {
  const fromCustomer = isCustomerOnly(viewer);
  const assigneeId = fromCustomer ? null : input.assigneeId;
  if (assigneeId !== null && !(await listAssignable(tx)).some(({ personId }) => personId === assigneeId)) return { ok: false, reason: "no-such-person" };
  const { id, number } = await addCallout(tx, { shopId: viewer.shopId, ...on, visibility: fromCustomer ? "customer" : input.visibility, assigneeId, body: input.body, fromCustomer, by: viewer });
  await told(tx, viewer, { id, ...on }, "put a callout", { number, visibility: fromCustomer ? "customer" : input.visibility, on: "fileId" in on.spot ? "photo" : "model" });
  return { ok: true, calloutId: id, number };
}

/** People a callout can be given to: the shop's own and its machinists. */
export async function listAssignable(tx: Tx): Promise<Member[]> {
  return (await listMembers(tx)).filter(({ roles }) => roles.some((role) => role !== "customer"));
}

export async function replyToCallout(viewer: Viewer, calloutId: string, body: string): Promise<void> {
  await inShop(viewer, async (tx) => {
    const callout = orNotFound(await findCallout(tx, viewer, calloutId));
    await addCalloutReply(tx, { shopId: viewer.shopId, callout, body, by: viewer });
    await told(tx, viewer, callout, "answered a callout", { number: callout.number });
  });
}

/** A customer closes only what they put themselves; the shop closes any. */
export function mayCloseCallout(viewer: Viewer, callout: Pick<Callout, "byPersonId" | "byGuestLinkId">): boolean {
  if (!isCustomerOnly(viewer)) return true;
  return (viewer.personId !== null && callout.byPersonId === viewer.personId) || (viewer.guestLinkId !== null && callout.byGuestLinkId === viewer.guestLinkId);
}

export async function closeCallout(viewer: Viewer, calloutId: string, closed: boolean): Promise<{ ok: true } | { ok: false; reason: "not-yours" | "was-so" }> {
  return inShop(viewer, async (tx) => {
    const callout = orNotFound(await findCallout(tx, viewer, calloutId));
    if (!mayCloseCallout(viewer, callout)) return { ok: false, reason: "not-yours" };
    if (!(await setCalloutClosed(tx, calloutId, closed ? viewer.name : null))) return { ok: false, reason: "was-so" };
    await told(tx, viewer, callout, closed ? "closed a callout" : "opened a callout again", { number: callout.number });
    return { ok: true };
  });
}

export async function assignCallout(viewer: Viewer, calloutId: string, assigneeId: string | null): Promise<{ ok: true } | { ok: false; reason: "no-such-person" }> {
  return inShop(viewer, async (tx) => {
    const callout = orNotFound(await findCallout(tx, viewer, calloutId));
    const assignee = assigneeId === null ? null : (await listAssignable(tx)).find(({ personId }) => personId === assigneeId);
    if (assignee === undefined) return { ok: false, reason: "no-such-person" };
    await setCalloutAssignee(tx, calloutId, assigneeId);
    await told(tx, viewer, callout, "gave a callout to somebody", { number: callout.number, to: assignee?.name ?? null });
    return { ok: true };
  });
}

/** The event names the revision: the id of a callout inside the shop is nobody else's business. */
async function told(tx: Tx, viewer: Viewer, callout: { id: string; revisionId: string; jobId: string }, action: string, detail: Parameters<typeof logOf>[3]): Promise<void> {
  await notify(tx, { shopId: viewer.shopId, jobId: callout.jobId, topic: "callout", id: callout.revisionId });
  await writeLog(tx, logOf(viewer, action, { type: "callout", id: callout.id, jobId: callout.jobId }, detail));
}
