import { findJob } from "#app/data/jobs.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { findShownRevision, seesOnlyShared } from "#app/data/shared.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

/** Where a page of photos or callouts stands, for this viewer; a revision that was not shown is not there for a customer. */
export async function loadShownPlace(tx: Tx, viewer: Viewer, revisionId: string) {
  const revision = orNotFound(await findShownRevision(tx, viewer, revisionId));
  const part = orNotFound(await findPart(tx, revision.partId));
  const job = orNotFound(await findJob(tx, revision.jobId));
  return {
    job: { id: job.id, number: job.number, title: job.title },
    part: { id: part.id, name: part.name, number: part.number },
    revision: { id: revision.id, ordinal: revision.ordinal, sealed: revision.sealedAt !== null },
    /** The customer's way back is the calm page of the job. */
    forCustomer: seesOnlyShared(viewer),
  };
}

export type ShownPlace = Awaited<ReturnType<typeof loadShownPlace>>;
