import { readFileSync } from "node:fs";
import type { CharacteristicValues } from "#app/data/characteristics.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestRevision, type TestShop } from "./test-shop.ts";

const step = (name: string) => readFileSync(new URL(`./models/step/${name}`, import.meta.url));

const blank: CharacteristicValues = {
  matingPartId: null, name: "", kind: "limits", nominalMm: null, lowerMm: null, upperMm: null, fitClass: null, printLowerMm: null, printUpperMm: null, question: "", method: "", places: 1, required: true, critical: false, photoRequired: false, provableOnPrint: true,
};

/**
 * A revision with a stored STEP, a mating part, three characteristics (a bore read at three places,
 * a least depth, a question), an instrument with U = 0.01 mm, and a whole print of it.
 */
export async function openTriedPrint(shop: TestShop) {
  const at = await openTestRevision(shop);
  const { designer } = shop.people;
  const { inShop } = await import("#app/data/scope.server.ts");
  const { givePresets } = await import("#app/services/shop-presets.server.ts");
  const { addCharacteristic } = await import("#app/data/characteristics.server.ts");
  const { addMatingPart } = await import("#app/data/mating-parts.server.ts");
  const { listPresetsToPick } = await import("#app/data/prints.server.ts");
  const { recordPrint } = await import("#app/services/prints.server.ts");
  const ids = await inShop(designer, async (tx) => {
    await givePresets(tx, designer.shopId);
    const part = { id: at.partId, jobId: at.jobId };
    const ringId = await addMatingPart(tx, designer.shopId, at.jobId, { name: "Ring", description: "", cameInOn: null, conditionIn: "", wentOutOn: null, conditionOut: "" });
    const forkId = await addMatingPart(tx, designer.shopId, at.jobId, { name: "Fork", description: "", cameInOn: null, conditionIn: "", wentOutOn: null, conditionOut: "" });
    const add = (values: Partial<CharacteristicValues>) => addCharacteristic(tx, designer.shopId, part, { ...blank, matingPartId: ringId, ...values });
    const [instrument] = await tx("instruments").insert({ shop_id: designer.shopId, name: "Bore gauge", kind: "bore gauge", resolution_mm: 0.001, uncertainty_mm: 0.01, trust: "unverified" }).returning("id");
    return {
      ringId,
      forkId,
      instrumentId: instrument.id as string,
      boreId: await add({ name: "Spigot bore", places: 3, printLowerMm: 62.15, printUpperMm: 62.2 }),
      depthId: await add({ name: "Seat depth", kind: "min", printLowerMm: 4, required: false }),
      dropsId: await add({ name: "Drops on", kind: "yes-no", question: "Does it drop on by hand?", photoRequired: true }),
      presetId: (await listPresetsToPick(tx))[0]!.id,
    };
  });
  const stepId = await storeStep(designer, at.jobId, at.revisionId, "cube_hole.step");
  const print = await recordPrint(designer, at.revisionId, { presetId: ids.presetId, whole: true, piece: "", proves: [], fileId: stepId, scale: { x: null, y: null, z: null }, printedOn: "2026-11-20", note: "" });
  if (!print.ok) throw new Error(print.reason);
  return { ...at, ...ids, stepId, printId: print.printId };
}

export type TriedPrint = Awaited<ReturnType<typeof openTriedPrint>>;

/** A model from an open repository (tests/support/models/README.md), stored and measured. */
export async function storeStep(viewer: Viewer, jobId: string, revisionId: string, name: string): Promise<string> {
  const demo = await import("#db/seeds/demo-files.ts");
  const id = await demo.storeDemoFile(viewer, { jobId, name, kind: "step", mediaType: "model/step", bytes: step(name), target: { to: "revision", id: revisionId } });
  await demo.measureDemoFile(viewer, id, false);
  return id;
}

/** A drawn photo, stored and made into its pictures. */
export async function storePhoto(viewer: Viewer, jobId: string, target: Parameters<typeof import("#db/seeds/demo-files.ts").storeDemoFile>[1]["target"]): Promise<string> {
  const demo = await import("#db/seeds/demo-files.ts");
  const sharp = (await import("sharp")).default;
  // Every photo has other bytes, as photos have.
  const background = `#${Math.floor(Math.random() * 0xffffff).toString(16).padStart(6, "0")}`;
  const bytes = await sharp({ create: { width: 64, height: 48, channels: 3, background } }).jpeg().toBuffer();
  const id = await demo.storeDemoFile(viewer, { jobId, name: "photo.jpg", kind: "photo", mediaType: "image/jpeg", bytes, target });
  if (target.to === "mating-part") {
    const { inShop } = await import("#app/data/scope.server.ts");
    const { linkMatingPartPhoto } = await import("#app/data/photos.server.ts");
    await inShop(viewer, (tx) => linkMatingPartPhoto(tx, { shopId: viewer.shopId, jobId, matingPartId: target.id, fileId: id }));
  }
  await demo.deriveDemoPhoto(viewer, id);
  return id;
}

/** Marks a revision released, as the owner of the tables could: the shortest way to what a seal refuses. */
export async function sealRevision(shop: TestShop, revisionId: string): Promise<void> {
  const { inShop } = await import("#app/data/scope.server.ts");
  await inShop(shop.people.owner, (tx) => tx("revisions").where({ id: revisionId }).update({ sealed_at: new Date() }));
}
