import { randomUUID } from "node:crypto";
import { addCharacteristic, listCharacteristics } from "#app/data/characteristics.server.ts";
import { listRevisionFiles } from "#app/data/files.server.ts";
import { listInstrumentsToPick } from "#app/data/fit-checks.server.ts";
import { shareJob } from "#app/data/guest-links.server.ts";
import { listQuestions } from "#app/data/makeability.server.ts";
import { addMatingPart, addMeasurement } from "#app/data/mating-parts.server.ts";
import { addPayment } from "#app/data/payments.server.ts";
import { listPresetsToPick } from "#app/data/prints.server.ts";
import { inShop, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { answerAsCustomer, recordAnswer, showToCustomer } from "#app/services/approvals.server.ts";
import { attachCalculation } from "#app/services/calculations.server.ts";
import { closeCallout, putPhotoCallout, replyToCallout } from "#app/services/callouts.server.ts";
import { readCautions } from "#app/services/cautions.server.ts";
import { createCustomer } from "#app/services/customers.server.ts";
import { recordFitCheck } from "#app/services/fit-checks.server.ts";
import { evaluateRevision } from "#app/services/gate.server.ts";
import { proposeInstructions, saveInstructions } from "#app/services/instructions.server.ts";
import { createJob } from "#app/services/jobs.server.ts";
import { answerMakeability } from "#app/services/makeability.server.ts";
import { createPart, createRevision, putRevisionAside } from "#app/services/parts.server.ts";
import { recordPrint } from "#app/services/prints.server.ts";
import { concedeLines, proposeRevision, releaseRevision } from "#app/services/release.server.ts";
import { givePresets } from "#app/services/shop-presets.server.ts";
import { store } from "#app/services/store.server.ts";
import { deriveDemoPhoto, measureDemoFile, storeDemoFile } from "./demo-files.ts";
import { buildDemoModels, type DemoModel } from "./demo-models.ts";
import { drawFitPhoto, drawMessage } from "./demo-pictures.ts";
import { demoParts, type ToldPart } from "./demo-story.ts";
import { seedPeople, viewerOf, type DemoPeople } from "./people.ts";

/** What a step of the story must give; a refusal here is a fault of the story. */
function must<T extends { ok: boolean }>(result: T): Extract<T, { ok: true }> {
  if (!result.ok) throw new Error(`the demo's story was refused: ${JSON.stringify(result)}`);
  return result as Extract<T, { ok: true }>;
}

const signing = (viewer: Viewer): Viewer => ({ ...viewer, provedAt: new Date().toISOString(), provedBy: "password" });

/** The demo shop with its job, told once through the services of the app; a second run finds it told. */
export async function seedDemo(): Promise<void> {
  const people = await seedPeople();
  const { owner } = people;
  await inShop(owner, async (tx) => {
    await givePresets(tx, owner.shopId);
    await tx("instruments").where("name", "like", "Caliper%").update({ trust: "checked", checked_on: "2026-11-20", checked_with: "gauge block 25 mm" });
  });
  if (await inShop(owner, (tx) => tx("jobs").first("id"))) return;
  await store().ensureBucket();

  const jobId = await inShop(owner, async (tx) => {
    const customerId = await createCustomer(tx, owner, { name: "Runa Aune", email: "runa@aune.example", phone: null, note: "Races the sidecar; answers by text message" });
    await tx("customers").where({ id: customerId }).update({ person_id: people.customer.personId });
    const job = must(await createJob(tx, owner, { number: "2026-001", customerId, title: "Racing sidecar, fuel side and drive", dueOn: "2027-02-12", promise: "No leak at the filler, and half a second a lap from the stiffer carrier" }));
    await tx("jobs").where({ id: job.id }).update({ deposit_agreed_minor: 48000 });
    await addPayment(tx, { shopId: owner.shopId, jobId: job.id, amountMinor: 48000, paidOn: "2026-11-12", how: "bank transfer", note: "deposit", recordedBy: owner.personId });
    await shareJob(tx, { shopId: owner.shopId, jobId: job.id, personId: people.machinist.personId! }, true);
    return job.id;
  });
  people.machinist = await viewerOf("machinist", owner.shopId);
  people.customer = await viewerOf("customer", owner.shopId);
  const models = await buildDemoModels();
  for (const told of demoParts) await tellPart(people, jobId, told, models);
}

async function tellPart(people: DemoPeople, jobId: string, told: ToldPart, models: Map<string, DemoModel>): Promise<void> {
  const { designer } = people;
  const { partId, matingPartId } = await inShop(designer, (tx) => tellRecords(tx, people, jobId, told));
  const ids = new Map<number, string>();
  const last = told.revisions.length;
  for (const [index, revision] of told.revisions.entries()) {
    const made = must(await inShop(designer, (tx) => createRevision(tx, designer, partId, { parentId: revision.parent ? ids.get(revision.parent)! : null, branchName: revision.branch ?? null, reason: revision.reason })));
    ids.set(index + 1, made.id);
    const model = models.get(revision.model)!;
    const target = { to: "revision", id: made.id } as const;
    const step = await storeDemoFile(designer, { jobId, name: `${model.name}.step`, kind: "step", mediaType: "model/step", bytes: model.step, target });
    const stl = await storeDemoFile(designer, { jobId, name: `${model.name}.stl`, kind: "stl", mediaType: "model/stl", bytes: model.stl, target });
    await measureDemoFile(designer, step, index + 1 === last);
    await measureDemoFile(designer, stl, index + 1 === last);
    for (const one of revision.tries) await tellTry(people, { jobId, partId, matingPartId, revisionId: made.id, stl }, one);
    if (revision.setAside) must(await inShop(designer, (tx) => putRevisionAside(tx, designer, made.id, revision.setAside!)));
  }
  await tellEnd(people, jobId, ids.get(last)!, told);
}

async function tellRecords(tx: Tx, { designer }: DemoPeople, jobId: string, { part, hardware, characteristics }: ToldPart) {
  const { material, ...values } = part;
  const stock = (await tx("materials").where({ code: material }).first("id")) as { id: string };
  const made = must(await createPart(tx, designer, jobId, { ...values, materialId: stock.id }));
  const matingPartId = await addMatingPart(tx, designer.shopId, jobId, { name: hardware.name, description: hardware.description, cameInOn: "2026-10-05", conditionIn: hardware.conditionIn, wentOutOn: null, conditionOut: "" });
  const caliper = (await listInstrumentsToPick(tx)).find(({ name }) => name.startsWith("Caliper"));
  for (const [name, valueMm] of Object.entries(hardware.measured)) {
    await addMeasurement(tx, { shopId: designer.shopId, jobId, matingPartId, name, valueMm, instrumentId: caliper!.id, uncertaintyMm: 0.03, note: "", measuredBy: designer.personId });
  }
  for (const characteristic of characteristics) {
    await addCharacteristic(tx, designer.shopId, { id: made.id, jobId }, {
      matingPartId, nominalMm: null, lowerMm: null, upperMm: null, fitClass: null, printLowerMm: null, printUpperMm: null, question: "", method: "", places: 1, required: true, critical: false, photoRequired: false, provableOnPrint: true, ...characteristic,
    });
  }
  return { partId: made.id, matingPartId };
}

async function tellTry({ designer }: DemoPeople, at: { jobId: string; partId: string; matingPartId: string; revisionId: string; stl: string }, told: ToldPart["revisions"][number]["tries"][number]): Promise<void> {
  const { presetId, instrumentId, characteristics } = await inShop(designer, async (tx) => ({
    presetId: (await listPresetsToPick(tx))[0]!.id,
    instrumentId: (await listInstrumentsToPick(tx)).find(({ name }) => name.startsWith("Caliper"))!.id,
    characteristics: await listCharacteristics(tx, at.partId),
  }));
  const print = must(await recordPrint(designer, at.revisionId, { presetId, whole: true, piece: "", proves: [], fileId: at.stl, scale: { x: null, y: null, z: null }, printedOn: "2026-11-20", note: "" }));
  const results = Object.entries(told.results).map(([name, found]) => ({
    characteristicId: characteristics.find((one) => one.name === name)!.id,
    readings: Array.isArray(found) ? found.map((mm) => ({ text: String(mm), unit: "mm" as const })) : [],
    answers: Array.isArray(found) ? [] : [found],
    instrumentId: Array.isArray(found) ? instrumentId : null,
    bandPosition: null,
    bandWidth: null,
  }));
  const check = must(await recordFitCheck(designer, { draftKey: randomUUID(), printId: print.printId, matingPartId: at.matingPartId, results, cause: told.cause ?? null, remarks: told.remarks, triedAt: new Date().toISOString() }));
  const bytes = await drawFitPhoto(told.photo);
  const photo = await storeDemoFile(designer, { jobId: at.jobId, name: `${told.photo.title.replace(/[^\w. -]/g, "")}.jpg`, kind: "photo", mediaType: "image/jpeg", bytes, target: { to: "fit-check", id: check.fitCheckId, characteristicId: null } });
  await deriveDemoPhoto(designer, photo);
}

async function tellEnd(people: DemoPeople, jobId: string, revisionId: string, told: ToldPart): Promise<void> {
  const { owner, designer, machinist, customer } = people;
  const { step, proposed, questions, photo } = await inShop(designer, async (tx) => ({
    step: (await listRevisionFiles(tx, revisionId)).find(({ role }) => role === "step")!,
    proposed: await proposeInstructions(tx, revisionId),
    questions: await listQuestions(tx),
    photo: ((await tx("fit_photos").where({ revision_id: revisionId }).first("file_id")) as { file_id: string }).file_id,
  }));
  const { datums, criticalSurfaces, coating, treatments } = told.instructions;
  must(await saveInstructions(designer, revisionId, { ...proposed.values, datums, criticalSurfaces, coating, treatments: proposed.holes.map(({ label }) => treatments(label)), modelSha256: step.sha256, rowVersion: null, confirm: true }));
  for (const calculation of told.calculations) must(await attachCalculation(designer, revisionId, { ...calculation, replaces: null }));
  if (told.machinist === "agrees") {
    must(await answerMakeability(machinist, revisionId, { modelSha256: step.sha256, priceMinor: 64000, readyOn: "2027-01-15", remark: "", answers: questions.map(({ id }) => ({ questionId: id, stance: "agree" as const, text: "" })), recorded: null }));
  }
  must(await showToCustomer(designer, revisionId));
  await tellCallout(people, photo);
  if (told.customer === "clicks") must(await answerAsCustomer(customer, revisionId, { answer: "yes", reason: "", modelSha256: step.sha256, changesSeen: false }));
  else {
    const picture = await storeDemoFile(designer, { jobId, name: "message.jpg", kind: "photo", mediaType: "image/jpeg", bytes: await drawMessage(["Looks right to me.", "Rod is clear now, go ahead", "and cut it. Runa"]), target: { to: "answer", id: revisionId } });
    await deriveDemoPhoto(designer, picture);
    must(await recordAnswer(designer, revisionId, { answer: "yes", reason: "Looks right to me, go ahead and cut it", modelSha256: step.sha256, changesSeen: false }, { name: "Runa Aune", how: "text-message", saidOn: "2026-11-24", pictureFileId: picture }));
  }
  await readCautions(designer, revisionId);
  must(await proposeRevision(signing(designer), revisionId));
  if (told.end === "at the gate") return;
  if (told.end === "released with a concession") {
    must(await concedeLines(signing(owner), revisionId, { lines: ["machinist"], reason: "Marten is away this week and has made this shape before", limitPieces: 2, limitUntil: null, outsideApproval: null }));
  }
  const seen = await inShop(owner, (tx) => evaluateRevision(tx, revisionId));
  must(await releaseRevision(signing(owner), revisionId, { hash: seen!.result.recordsHash, records: seen!.records, reason: "" }));
}

/** A short conversation on a spot of the photo, opened by the customer and closed by them. */
async function tellCallout({ customer, designer }: DemoPeople, photo: string): Promise<void> {
  const callout = must(await putPhotoCallout(customer, photo, { x: 0.62, y: 0.44 }, { body: "Will a ball key still reach this one?", visibility: "customer", assigneeId: null }));
  await replyToCallout(designer, callout.calloutId, "Yes: 14 mm clear above the screw head, tried with the long key.");
  must(await closeCallout(customer, callout.calloutId, true));
}
