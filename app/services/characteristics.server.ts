import { addCharacteristic, changeCharacteristic, findCharacteristic, isTried, setCharacteristicAside, type Characteristic, type CharacteristicValues } from "#app/data/characteristics.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findMatingPart } from "#app/data/mating-parts.server.ts";
import { moveRow } from "#app/data/ordering.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { limitsOfClass } from "#app/engineering/limits-of-class.ts";

export type CharacteristicRefusal = "no-such-class" | "no-such-mating-part" | "tried";

export type SaveCharacteristic = { ok: true; id: string; partId: string } | { ok: false; reason: CharacteristicRefusal } | { ok: false; reason: "changed"; current: Characteristic };

export async function createCharacteristic(tx: Tx, viewer: Viewer, partId: string, values: CharacteristicValues): Promise<SaveCharacteristic> {
  const part = orNotFound(await findPart(tx, partId));
  const checked = await check(tx, part.jobId, values);
  if (!checked.ok) return checked;
  const id = await addCharacteristic(tx, viewer.shopId, part, checked.values);
  await enter(tx, viewer, "added a characteristic", { id, jobId: part.jobId, partId }, checked.values);
  return { ok: true, id, partId };
}

/**
 * Changes a characteristic. Once it was tried, its results are numbers or answers: then a question
 * can't become limits any more, nor limits a question.
 */
export async function editCharacteristic(tx: Tx, viewer: Viewer, id: string, rowVersion: number, values: CharacteristicValues): Promise<SaveCharacteristic> {
  const before = orNotFound(await findCharacteristic(tx, id));
  const checked = await check(tx, before.jobId, values);
  if (!checked.ok) return checked;
  if ((before.kind === "yes-no") !== (values.kind === "yes-no") && (await isTried(tx, id))) return { ok: false, reason: "tried" };
  if (!(await changeCharacteristic(tx, id, rowVersion, checked.values))) return { ok: false, reason: "changed", current: orNotFound(await findCharacteristic(tx, id)) };
  await enter(tx, viewer, "changed a characteristic", before, checked.values);
  return { ok: true, id, partId: before.partId };
}

export async function putCharacteristicAside(tx: Tx, viewer: Viewer, id: string, aside: boolean): Promise<{ partId: string }> {
  const characteristic = orNotFound(await findCharacteristic(tx, id));
  await setCharacteristicAside(tx, id, aside);
  await enter(tx, viewer, aside ? "set a characteristic aside" : "took a characteristic up again", characteristic, characteristic);
  return { partId: characteristic.partId };
}

/** Puts it one place earlier or later among those of its part that are tried. */
export async function moveCharacteristic(tx: Tx, viewer: Viewer, id: string, by: 1 | -1, partId: string): Promise<void> {
  const characteristic = orNotFound(await findCharacteristic(tx, id));
  if (characteristic.partId !== partId) return void orNotFound(undefined);
  if (await moveRow(tx, "characteristics", id, by, { part_id: characteristic.partId })) await enter(tx, viewer, "moved a characteristic", characteristic, characteristic);
}

async function enter(tx: Tx, viewer: Viewer, action: string, at: { id: string; jobId: string; partId: string }, values: CharacteristicValues): Promise<void> {
  await notify(tx, { shopId: viewer.shopId, jobId: at.jobId, topic: "gate", id: at.partId });
  const { name, kind, lowerMm, upperMm, fitClass, printLowerMm, printUpperMm, required, critical } = values;
  await writeLog(tx, logOf(viewer, action, { type: "characteristic", id: at.id, jobId: at.jobId }, { name, kind, lower_mm: lowerMm, upper_mm: upperMm, fit_class: fitClass, print_lower_mm: printLowerMm, print_upper_mm: printUpperMm, required, critical }));
}

/** A class becomes its limits here, so that everything behind judges by numbers. */
async function check(tx: Tx, jobId: string, values: CharacteristicValues): Promise<{ ok: true; values: CharacteristicValues } | { ok: false; reason: CharacteristicRefusal }> {
  if (values.matingPartId !== null && (await findMatingPart(tx, values.matingPartId))?.jobId !== jobId) return { ok: false, reason: "no-such-mating-part" };
  if (values.kind !== "fit") return { ok: true, values };
  const limits = limitsOfClass(values.nominalMm ?? NaN, values.fitClass ?? "");
  if (!limits) return { ok: false, reason: "no-such-class" };
  return { ok: true, values: { ...values, lowerMm: limits.lower_mm, upperMm: limits.upper_mm } };
}
