import { createHash, randomUUID } from "node:crypto";
import { readFileSync } from "node:fs";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestRevision, type TestShop } from "./test-shop.ts";

const step = readFileSync(new URL("./models/step/cube_hole.step", import.meta.url));

/**
 * A revision at the gate with every line met, told through the app's own services: the STEP of an
 * open model repository, one yes/no characteristic tried on a print, instructions, answers.
 */
export async function openClearedRevision(shop: TestShop) {
  const at = await openTestRevision(shop);
  const { designer, owner } = shop.people;
  const { inShop } = await import("#app/data/scope.server.ts");
  const demo = await import("#db/seeds/demo-files.ts");
  const { givePresets } = await import("#app/services/shop-presets.server.ts");
  const { addCharacteristic } = await import("#app/data/characteristics.server.ts");
  const { addMatingPart } = await import("#app/data/mating-parts.server.ts");
  const { listPresetsToPick } = await import("#app/data/prints.server.ts");
  const { recordPrint } = await import("#app/services/prints.server.ts");
  const { recordFitCheck } = await import("#app/services/fit-checks.server.ts");
  const { proposeInstructions, saveInstructions } = await import("#app/services/instructions.server.ts");
  const { answerMakeability } = await import("#app/services/makeability.server.ts");
  const { listQuestions } = await import("#app/data/makeability.server.ts");
  const { recordAnswer } = await import("#app/services/approvals.server.ts");
  const { readCautions } = await import("#app/services/cautions.server.ts");
  const sharp = (await import("sharp")).default;

  const { characteristicId, matingPartId, presetId, questions } = await inShop(owner, async (tx) => {
    await givePresets(tx, owner.shopId);
    await tx("jobs").where({ id: at.jobId }).update({ deposit_agreed_minor: 123456 });
    await tx("payments").insert({ shop_id: owner.shopId, job_id: at.jobId, amount_minor: 123456, paid_on: "2026-11-01", how: "bank" });
    const matingPartId = await addMatingPart(tx, owner.shopId, at.jobId, { name: "Ring", description: "", cameInOn: "2026-10-01", conditionIn: "clean", wentOutOn: null, conditionOut: "" });
    const characteristicId = await addCharacteristic(tx, owner.shopId, { id: at.partId, jobId: at.jobId }, {
      matingPartId, name: "Drops on", kind: "yes-no", question: "Does it drop on?", nominalMm: null, lowerMm: null, upperMm: null, fitClass: null, printLowerMm: null, printUpperMm: null, method: "", places: 1, required: true, critical: false, photoRequired: true, provableOnPrint: true,
    });
    return { matingPartId, characteristicId, presetId: (await listPresetsToPick(tx))[0]!.id, questions: await listQuestions(tx) };
  });
  const target = { to: "revision", id: at.revisionId } as const;
  const stepId = await demo.storeDemoFile(designer, { jobId: at.jobId, name: "plate.step", kind: "step", mediaType: "model/step", bytes: step, target });
  await demo.measureDemoFile(designer, stepId, true);
  const print = await recordPrint(designer, at.revisionId, { presetId, whole: true, piece: "", proves: [], fileId: stepId, scale: { x: null, y: null, z: null }, printedOn: "2026-11-20", note: "" });
  if (!print.ok) throw new Error(print.reason);
  const fit = (answer: boolean) => recordFitCheck(designer, { draftKey: randomUUID(), printId: print.printId, matingPartId, results: [{ characteristicId, readings: [], answers: [answer], instrumentId: null, bandPosition: null, bandWidth: null }], cause: null, remarks: "", triedAt: new Date().toISOString() });
  const check = await fit(true);
  if (!check.ok) throw new Error(check.reason);
  const photoId = await demo.storeDemoFile(designer, { jobId: at.jobId, name: "fit.jpg", kind: "photo", mediaType: "image/jpeg", bytes: await sharp({ create: { width: 64, height: 48, channels: 3, background: "#88a" } }).jpeg().toBuffer(), target: { to: "fit-check", id: check.fitCheckId, characteristicId } });
  await demo.deriveDemoPhoto(designer, photoId);

  const modelSha256 = createHash("sha256").update(step).digest("hex");
  const proposed = await inShop(designer, (tx) => proposeInstructions(tx, at.revisionId));
  await saveInstructions(designer, at.revisionId, { ...proposed.values, datums: "A: foot", criticalSurfaces: "none", treatments: proposed.holes.map(() => ({ treatment: "leave", spec: "" })), modelSha256, rowVersion: null, confirm: true });
  await answerMakeability(designer, at.revisionId, { modelSha256, priceMinor: null, readyOn: null, remark: "", answers: questions.map(({ id }) => ({ questionId: id, stance: "agree", text: "" })), recorded: { name: "A machinist", how: "call" } });
  await recordAnswer(designer, at.revisionId, { answer: "yes", reason: "", modelSha256, changesSeen: false }, { name: "The customer", how: "call", saidOn: "2026-11-25", pictureFileId: null });
  await readCautions(designer, at.revisionId);
  return { ...at, stepId, photoId, printId: print.printId, tryAgain: fit };
}

/** What an owner's page shows of a revision now, as its form sends it back. */
export async function seenOf(viewer: Viewer, revisionId: string) {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { evaluateRevision } = await import("#app/services/gate.server.ts");
  const evaluated = (await inShop(viewer, (tx) => evaluateRevision(tx, revisionId)))!;
  return { hash: evaluated.result.recordsHash, records: evaluated.records as unknown, reason: "", verdict: evaluated.result.verdict, lines: evaluated.result.lines };
}
