import { addCautionRead } from "#app/data/caution-reads.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound } from "#app/data/scope.server.ts";
import { cautionsFor, type Fluid } from "#app/domain/cautions.ts";
import type { Viewer } from "#app/domain/viewer.ts";

/** Records that this person read every caution that the part shows now, each with what it follows from. */
export async function readCautions(viewer: Viewer, revisionId: string): Promise<void> {
  await inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return;
    const part = orNotFound(await findPart(tx, revision.partId));
    const cautions = cautionsFor({ speed_rpm: part.speedRpm, pressure_MPa: part.pressureMPa, temperature_C: part.temperatureC, fluid: part.fluid as Fluid | null, lifting: part.lifting });
    for (const { code, basis } of cautions) {
      await addCautionRead(tx, { shopId: viewer.shopId, jobId: revision.jobId, revisionId, caution: code, basis, byPersonId: viewer.personId, byName: viewer.name });
    }
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "read the cautions", { type: "revision", id: revisionId, jobId: revision.jobId }, { cautions: cautions.map(({ code }) => code) }));
  });
}
