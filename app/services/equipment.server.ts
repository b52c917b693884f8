import { addInstrument, changeInstrument, findInstrument, type Instrument, type InstrumentValues } from "#app/data/instruments.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addMaterial, changeMaterial, findMaterial, isMaterialCodeTaken, type Material, type MaterialValues } from "#app/data/materials.server.ts";
import { moveRow } from "#app/data/ordering.server.ts";
import { addPreset, addPrinter, changePreset, changePrinter, findPreset, findPrinter, type PresetValues, type Printer, type PrinterValues, type PrintPreset } from "#app/data/printers.server.ts";
import { addQuestion, changeQuestion, findShopQuestion, type ShopQuestion } from "#app/data/questions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { setRowAside, type EquipmentTable } from "#app/data/equipment.server.ts";
import { changeShop, findShop, hasRecordedMoney, type Shop } from "#app/data/shops.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export type Saved<Row> = { ok: true; id: string } | { ok: false; reason: "changed"; current: Row };

/** Which row is saved, and at which version it was read; null makes a new one. */
export type Existing = { id: string; rowVersion: number } | null;

export async function saveInstrument(tx: Tx, viewer: Viewer, existing: Existing, values: InstrumentValues): Promise<Saved<Instrument>> {
  if (existing && !(await changeInstrument(tx, existing.id, existing.rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findInstrument(tx, existing.id)) };
  const id = existing?.id ?? (await addInstrument(tx, viewer.shopId, values));
  await writeLog(tx, logOf(viewer, existing ? "changed an instrument" : "added an instrument", { type: "instrument", id }, { name: values.name, trust: values.trust, uncertainty_mm: values.uncertaintyMm }));
  return { ok: true, id };
}

/**
 * Records that an instrument was checked on a gauge block or ring today.
 *
 * @param today yyyy-mm-dd
 */
export async function checkInstrument(tx: Tx, viewer: Viewer, id: string, checkedWith: string, today: string): Promise<void> {
  const instrument = orNotFound(await findInstrument(tx, id));
  await changeInstrument(tx, id, instrument.rowVersion, { ...instrument, trust: "checked", checkedOn: today, checkedWith });
  await writeLog(tx, logOf(viewer, "checked an instrument", { type: "instrument", id }, { name: instrument.name, with: checkedWith }));
}

export async function savePrinter(tx: Tx, viewer: Viewer, existing: Existing, values: PrinterValues): Promise<Saved<Printer>> {
  if (existing && !(await changePrinter(tx, existing.id, existing.rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findPrinter(tx, existing.id)) };
  const id = existing?.id ?? (await addPrinter(tx, viewer.shopId, values));
  await writeLog(tx, logOf(viewer, existing ? "changed a printer" : "added a printer", { type: "printer", id }, { name: values.name }));
  return { ok: true, id };
}

export async function savePreset(tx: Tx, viewer: Viewer, existing: Existing, values: PresetValues): Promise<Saved<PrintPreset> | { ok: false; reason: "no-such-printer" }> {
  if (!(await findPrinter(tx, values.printerId))) return { ok: false, reason: "no-such-printer" };
  if (existing && !(await changePreset(tx, existing.id, existing.rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findPreset(tx, existing.id)) };
  const id = existing?.id ?? (await addPreset(tx, viewer.shopId, values));
  await writeLog(tx, logOf(viewer, existing ? "changed a print preset" : "added a print preset", { type: "print preset", id }, { name: values.name }));
  return { ok: true, id };
}

export async function saveMaterial(tx: Tx, viewer: Viewer, existing: Existing, values: MaterialValues): Promise<Saved<Material> | { ok: false; reason: "code-taken" }> {
  if (await isMaterialCodeTaken(tx, values.code, existing?.id ?? null)) return { ok: false, reason: "code-taken" };
  if (existing && !(await changeMaterial(tx, existing.id, existing.rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findMaterial(tx, existing.id)) };
  const id = existing?.id ?? (await addMaterial(tx, viewer.shopId, values));
  await writeLog(tx, logOf(viewer, existing ? "changed a material" : "added a material", { type: "material", id }, { code: values.code }));
  return { ok: true, id };
}

/**
 * Saves a question to the machinist. One that was answered keeps its words, since the answers were
 * given to them: it is set aside, and the new words take its place as a question of their own.
 */
export async function saveQuestion(tx: Tx, viewer: Viewer, existing: Existing, question: string): Promise<Saved<ShopQuestion>> {
  const before = existing && orNotFound(await findShopQuestion(tx, existing.id));
  if (before && before.rowVersion !== existing.rowVersion) return { ok: false, reason: "changed", current: before };
  let id: string;
  if (before && before.answers > 0 && before.question !== question) {
    id = await addQuestion(tx, viewer.shopId, question, before.id);
    await setRowAside(tx, "makeability_questions", before.id, true);
  } else if (before) {
    if (!(await changeQuestion(tx, before.id, before.rowVersion, question))) return { ok: false, reason: "changed", current: orNotFound(await findShopQuestion(tx, before.id)) };
    id = before.id;
  } else id = await addQuestion(tx, viewer.shopId, question);
  await writeLog(tx, logOf(viewer, before ? "changed a makeability question" : "added a makeability question", { type: "makeability question", id }, { question }));
  return { ok: true, id };
}

export async function moveQuestion(tx: Tx, viewer: Viewer, id: string, by: 1 | -1): Promise<void> {
  orNotFound(await findShopQuestion(tx, id));
  if (!(await moveRow(tx, "makeability_questions", id, by))) return;
  await writeLog(tx, logOf(viewer, "put the makeability questions in another order", { type: "makeability question", id }));
}

const nouns: Record<EquipmentTable, string> = { instruments: "instrument", printers: "printer", print_presets: "print preset", materials: "material", makeability_questions: "makeability question" };

export async function putEquipmentAside(tx: Tx, viewer: Viewer, table: EquipmentTable, id: string, aside: boolean): Promise<void> {
  orNotFound((await setRowAside(tx, table, id, aside)) || undefined);
  const noun = nouns[table];
  await writeLog(tx, logOf(viewer, aside ? `set ${noun === "instrument" ? "an" : "a"} ${noun} aside` : `took ${noun === "instrument" ? "an" : "a"} ${noun} up again`, { type: noun, id }));
}

export async function saveShop(tx: Tx, viewer: Viewer, rowVersion: number, values: Pick<Shop, "name" | "currency" | "replyTo">): Promise<Saved<Shop> | { ok: false; reason: "money-recorded" }> {
  const shop = orNotFound(await findShop(tx));
  // Amounts are kept as bare minor units: another currency would change what they say.
  if (shop.currency !== values.currency && (await hasRecordedMoney(tx))) return { ok: false, reason: "money-recorded" };
  if (!(await changeShop(tx, shop.id, rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findShop(tx)) };
  await writeLog(tx, logOf(viewer, "changed the shop's settings", { type: "shop", id: shop.id }, { name: values.name, currency: values.currency }));
  return { ok: true, id: shop.id };
}
