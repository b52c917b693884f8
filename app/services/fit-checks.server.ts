import { listCharacteristics, type Characteristic } from "#app/data/characteristics.server.ts";
import { notify } from "#app/data/events.server.ts";
import { addFitCheck, findFitCheck, findFitCheckByDraft, listFitResults, listInstrumentsToPick, setFitCause, type FitCause, type NewFitResult, type PickedInstrument } from "#app/data/fit-checks.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findMatingPart } from "#app/data/mating-parts.server.ts";
import { findPrint, type Print } from "#app/data/prints.server.ts";
import { lockRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import { readingMm, type FitSubmission, type Keyed } from "#app/domain/fit-draft.ts";
import { judgeOnPrint } from "#app/domain/fit.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export type RecordFitCheck =
  | { ok: true; fitCheckId: string; /** It was stored by an earlier sending. */ already: boolean }
  | { ok: false; status: 400 | 404 | 409; reason: string };

const refuse = (status: 400 | 404 | 409, reason: string) => ({ ok: false, status, reason }) as const;

/**
 * Stores a fit check as it was keyed in at the bench. All is read and checked again here; verdicts
 * are not stored, they follow from the readings. A draft that was stored before is found again
 * and answered with the same fit check, also after the revision was sealed.
 */
export async function recordFitCheck(viewer: Viewer, submission: FitSubmission): Promise<RecordFitCheck> {
  return inShop(viewer, async (tx) => {
    const stored = await findFitCheckByDraft(tx, submission.draftKey);
    if (stored) return already(stored.id, stored.printId, submission);
    const print = await findPrint(tx, submission.printId);
    if (!print) return refuse(404, "The print is not here.");
    const revision = orNotFound(await lockRevision(tx, print.revisionId));
    if (revision.sealedAt) return refuse(409, `Revision ${revision.ordinal} was released and is sealed: nothing can be added to what its decision rests on. Record a print of the next revision and try that one on.`);
    const matingPart = await findMatingPart(tx, submission.matingPartId);
    if (!matingPart || matingPart.jobId !== print.jobId) return refuse(400, "Pick the mating part again: it is not one of this job.");
    const characteristics = await listCharacteristics(tx, revision.partId, { withSetAside: true });
    const read = readResults(submission, { print, characteristics, instruments: await instrumentsOf(tx, submission) });
    if (!read.ok) return refuse(400, read.reason);

    const failed = read.results.filter((result) => judgeOnPrint(characteristics.find(({ id }) => id === result.characteristicId)!, result).verdict === "fails");
    const fitCheckId = await addFitCheck(tx, {
      shopId: viewer.shopId,
      jobId: print.jobId,
      revisionId: print.revisionId,
      printId: print.id,
      matingPartId: matingPart.id,
      cause: failed.length > 0 ? submission.cause : null,
      remarks: submission.remarks,
      draftKey: submission.draftKey,
      at: triedAt(submission.triedAt, new Date()),
      by: viewer,
      results: read.results,
    });
    if (fitCheckId === null) {
      // The same draft came in twice at once; the other was first and has committed by now.
      const first = orNotFound(await findFitCheckByDraft(tx, submission.draftKey));
      return already(first.id, first.printId, submission);
    }
    await notify(tx, { shopId: viewer.shopId, jobId: print.jobId, topic: "gate", id: print.revisionId });
    await writeLog(tx, logOf(viewer, "tried a print on", { type: "fit-check", id: fitCheckId, jobId: print.jobId }, { print: print.name, on: matingPart.name, tried: read.results.length, failed: failed.length }));
    return { ok: true, fitCheckId, already: false };
  });
}

function already(fitCheckId: string, printId: string, submission: FitSubmission): RecordFitCheck {
  return printId === submission.printId ? { ok: true, fitCheckId, already: true } : refuse(409, "This draft was stored for another print. Begin a new fit check.");
}

/** A draft may wait for its connection this long; an older time is a wrong clock. */
const longestWait = 31 * 24 * 3600 * 1000;

/** When it was tried, by the phone's clock where that can be, which decides what was found last. */
function triedAt(said: string, now: Date): Date {
  const at = new Date(said);
  return at <= now && now.getTime() - at.getTime() < longestWait ? at : now;
}

async function instrumentsOf(tx: Tx, { results }: FitSubmission): Promise<PickedInstrument[]> {
  return results.some(({ instrumentId }) => instrumentId !== null) ? listInstrumentsToPick(tx) : [];
}

interface Known {
  print: Print;
  characteristics: Characteristic[];
  instruments: PickedInstrument[];
}

function readResults(submission: FitSubmission, { print, characteristics, instruments }: Known): { ok: true; results: NewFitResult[] } | { ok: false; reason: string } {
  const results: NewFitResult[] = [];
  for (const result of submission.results) {
    const characteristic = characteristics.find(({ id }) => id === result.characteristicId);
    if (!characteristic) return { ok: false, reason: "A result names a characteristic that this part does not have. Load the page again." };
    const say = (what: string) => ({ ok: false, reason: `${characteristic.name}: ${what}` }) as const;
    if (results.some(({ characteristicId }) => characteristicId === characteristic.id)) return say("it stands twice in this fit check.");
    if (!characteristic.provableOnPrint || !(print.whole || print.proves.includes(characteristic.id))) return say(`print ${print.name} can't prove it.`);
    if (characteristic.matingPartId !== null && characteristic.matingPartId !== submission.matingPartId) return say("it is tried on another mating part. Try it on that one in a fit check of its own.");
    const yesNo = characteristic.kind === "yes-no";
    if (yesNo ? result.readings.length > 0 : result.answers.length > 0) return say(yesNo ? "it is answered by yes or no, not by a reading." : "it is read, not answered.");
    const given = yesNo ? result.answers.length : result.readings.length;
    if (given === 0) return say("nothing was found.");
    if (given > characteristic.places) return say(`it has ${given} readings for ${characteristic.places} ${characteristic.places === 1 ? "place" : "places"}.`);
    const readings = readLengths(result.readings);
    if (!readings.ok) return say(readings.reason);
    const band = readLengths([result.bandPosition, result.bandWidth].map((keyed) => keyed ?? { text: "0", unit: "mm" }));
    if (!band.ok) return say(`witness mark: ${band.reason}`);
    const [position, width] = band.mm as [number, number];
    if (width < 0) return say("a witness mark can't be narrower than nothing.");
    const instrument = instruments.find(({ id }) => id === result.instrumentId);
    if (result.instrumentId !== null && !instrument) return say("its instrument is not in the shop any more. Pick another.");
    results.push({
      characteristicId: characteristic.id,
      readingsMm: readings.mm,
      answers: result.answers,
      instrumentId: instrument?.id ?? null,
      uncertaintyMm: instrument?.uncertaintyMm ?? null,
      bandPositionMm: result.bandPosition === null ? null : position,
      bandWidthMm: result.bandWidth === null ? null : width,
    });
  }
  return results.length > 0 ? { ok: true, results } : { ok: false, reason: "Nothing was tried yet. Read one characteristic at least." };
}

function readLengths(keyed: readonly Keyed[]): { ok: true; mm: number[] } | { ok: false; reason: string } {
  const mm: number[] = [];
  for (const one of keyed) {
    const read = readingMm(one);
    if (!read.ok) return { ok: false, reason: `“${one.text}”: ${read.reason}` };
    mm.push(read.mm);
  }
  return { ok: true, mm };
}

/** Names or changes why a fit check failed, and its remarks, until the revision is sealed. */
export async function nameFitCause(viewer: Viewer, fitCheckId: string, cause: FitCause | null, remarks: string): Promise<{ ok: true } | { ok: false; reason: "sealed" | "nothing-failed" }> {
  return inShop(viewer, async (tx) => {
    const check = orNotFound(await findFitCheck(tx, fitCheckId));
    const revision = orNotFound(await lockRevision(tx, check.revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    if (cause !== null) {
      const characteristics = await listCharacteristics(tx, revision.partId, { withSetAside: true });
      const results = await listFitResults(tx, [fitCheckId]);
      const failed = results.some((result) => judgeOnPrint(characteristics.find(({ id }) => id === result.characteristicId)!, result).verdict === "fails");
      if (!failed) return { ok: false, reason: "nothing-failed" };
    }
    await setFitCause(tx, fitCheckId, cause, remarks);
    await notify(tx, { shopId: viewer.shopId, jobId: check.jobId, topic: "gate", id: check.revisionId });
    await writeLog(tx, logOf(viewer, "named why a fit check failed", { type: "fit-check", id: fitCheckId, jobId: check.jobId }, { cause, before: check.cause, remarks }));
    return { ok: true };
  });
}
