import { findJob } from "#app/data/jobs.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";

/** What every page of a revision says of where it stands. */
export interface RevisionPlace {
  job: { id: string; number: string; title: string };
  part: { id: string; name: string; number: string };
  revision: { id: string; ordinal: number; sealed: boolean };
}

export async function loadRevisionPlace(tx: Tx, revisionId: string): Promise<RevisionPlace> {
  const revision = orNotFound(await findRevision(tx, revisionId));
  const part = orNotFound(await findPart(tx, revision.partId));
  const job = orNotFound(await findJob(tx, revision.jobId));
  return {
    job: { id: job.id, number: job.number, title: job.title },
    part: { id: part.id, name: part.name, number: part.number },
    revision: { id: revision.id, ordinal: revision.ordinal, sealed: revision.sealedAt !== null },
  };
}
