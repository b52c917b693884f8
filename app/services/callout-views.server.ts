import { href } from "react-router";
import type { Callout } from "#app/data/callouts.server.ts";
import { viewerCan, type Viewer } from "#app/domain/viewer.ts";

/** A callout as this viewer may see it: who it is given to, and whom it is kept from, stay inside the shop. */
export function calloutView(viewer: Viewer, callout: Callout) {
  const inside = viewerCan(viewer, "callout:internal");
  return {
    id: callout.id,
    number: callout.number,
    body: callout.body,
    to: href("/callouts/:calloutId", { calloutId: callout.id }),
    fileId: callout.fileId,
    spot: callout.x !== null && callout.y !== null ? { x: callout.x, y: callout.y } : null,
    pointMm: callout.pointMm,
    byName: callout.byName,
    at: callout.at,
    replies: callout.replies,
    closed: callout.closedAt !== null,
    closedAt: callout.closedAt,
    closedByName: callout.closedByName,
    fromCustomer: callout.fromCustomer,
    internal: inside && callout.visibility === "internal",
    assignee: inside ? callout.assigneeName : null,
    assigneeId: inside ? callout.assigneeId : null,
  };
}

export type CalloutView = ReturnType<typeof calloutView>;
