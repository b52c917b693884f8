import { notify } from "#app/data/events.server.ts";
import { findInstrument } from "#app/data/instruments.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addMatingPart, addMeasurement, changeMatingPart, findMatingPart, findMeasurement, setMatingPartAside, setMeasurementAside, type MatingPart, type MatingPartValues } from "#app/data/mating-parts.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export type SaveMatingPart = { ok: true; id: string } | { ok: false; reason: "changed"; current: MatingPart };

export async function takeInMatingPart(tx: Tx, viewer: Viewer, jobId: string, values: MatingPartValues): Promise<string> {
  orNotFound(await findJob(tx, jobId));
  const id = await addMatingPart(tx, viewer.shopId, jobId, values);
  await enter(tx, viewer, "took in a mating part", { id, jobId }, { ...values });
  return id;
}

/** Custody is part of the record: what was changed is entered with its new values. */
export async function editMatingPart(tx: Tx, viewer: Viewer, id: string, rowVersion: number, values: MatingPartValues): Promise<SaveMatingPart> {
  const before = orNotFound(await findMatingPart(tx, id));
  if (!(await changeMatingPart(tx, id, rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findMatingPart(tx, id)) };
  await enter(tx, viewer, before.wentOutOn === null && values.wentOutOn !== null ? "gave a mating part back" : "changed a mating part", before, { ...values });
  return { ok: true, id };
}

export async function putMatingPartAside(tx: Tx, viewer: Viewer, id: string, aside: boolean): Promise<{ jobId: string }> {
  const matingPart = orNotFound(await findMatingPart(tx, id));
  await setMatingPartAside(tx, id, aside);
  await enter(tx, viewer, aside ? "set a mating part aside" : "took a mating part up again", matingPart, { name: matingPart.name });
  return { jobId: matingPart.jobId };
}

export interface NewReading {
  name: string;
  valueMm: number;
  instrumentId: string | null;
  note: string;
}

/** Records what was measured; the instrument's uncertainty as it is today is kept with it. */
export async function measureMatingPart(tx: Tx, viewer: Viewer, matingPartId: string, reading: NewReading): Promise<{ ok: true; id: string } | { ok: false; reason: "no-such-instrument" }> {
  const matingPart = orNotFound(await findMatingPart(tx, matingPartId));
  const instrument = reading.instrumentId === null ? null : await findInstrument(tx, reading.instrumentId);
  if (instrument === undefined || instrument?.setAside) return { ok: false, reason: "no-such-instrument" };
  const id = await addMeasurement(tx, {
    shopId: viewer.shopId,
    jobId: matingPart.jobId,
    matingPartId,
    name: reading.name,
    valueMm: reading.valueMm,
    instrumentId: instrument?.id ?? null,
    uncertaintyMm: instrument?.uncertaintyMm ?? null,
    note: reading.note,
    measuredBy: viewer.personId,
  });
  await notify(tx, { shopId: viewer.shopId, jobId: matingPart.jobId, topic: "gate", id: matingPartId });
  await writeLog(tx, logOf(viewer, "measured a mating part", { type: "measurement", id, jobId: matingPart.jobId }, { matingPart: matingPart.name, name: reading.name, value_mm: reading.valueMm, instrument: instrument?.name ?? null, uncertainty_mm: instrument?.uncertaintyMm ?? null }));
  return { ok: true, id };
}

/** A measurement must belong to the mating part whose page asks. */
export async function putMeasurementAside(tx: Tx, viewer: Viewer, matingPartId: string, id: string, aside: boolean): Promise<void> {
  const measurement = await findMeasurement(tx, id);
  if (measurement?.matingPartId !== matingPartId) return void orNotFound(undefined);
  await setMeasurementAside(tx, id, aside);
  await notify(tx, { shopId: viewer.shopId, jobId: measurement.jobId, topic: "gate", id: matingPartId });
  await writeLog(tx, logOf(viewer, aside ? "set a measurement aside" : "took a measurement up again", { type: "measurement", id, jobId: measurement.jobId }, { name: measurement.name, value_mm: measurement.valueMm }));
}

async function enter(tx: Tx, viewer: Viewer, action: string, at: { id: string; jobId: string }, detail: Record<string, string | null>): Promise<void> {
  await notify(tx, { shopId: viewer.shopId, jobId: at.jobId, topic: "gate", id: at.id });
  await writeLog(tx, logOf(viewer, action, { type: "mating part", id: at.id, jobId: at.jobId }, detail));
}
