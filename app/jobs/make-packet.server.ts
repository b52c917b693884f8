import { createHash } from "node:crypto";
import { PassThrough, type Readable } from "node:stream";
import { buffer } from "node:stream/consumers";
import yazl from "yazl";
import { findDecision, type Decision } from "#app/data/decisions.server.ts";
import { notify } from "#app/data/events.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { writeLog } from "#app/data/logbook.server.ts";
import { findPacket, finishPacket, listMachinistsOf, notePacketAttempt } from "#app/data/packets.server.ts";
import { inShop, orNotFound } from "#app/data/scope.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { loadSheetRecords } from "#app/data/sheet-records.server.ts";
import type { ManifestFile } from "#app/domain/manifest.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { queueMail } from "#app/services/mail.server.ts";
import { gateSnapshot, packetManifest, packetSums } from "#app/services/packet-contents.server.ts";
import { releaseSheet } from "#app/services/release-sheet.server.ts";
import { store } from "#app/services/store.server.ts";
import type { JobPayload } from "./queues.ts";

/**
 * Builds the packet of a release from its manifest, to the same bytes however often: files in
 * the order of their paths, every time stamp the decision's. A stored byte that is not the
 * sealed one stops it, and is said. Tried again until it succeeds.
 */
export async function makePacket({ shopId, id }: JobPayload): Promise<void> {
  const scope = housekeeper(shopId!);
  const loaded = await inShop(scope, async (tx) => {
    const packet = await findPacket(tx, id);
    if (!packet || packet.state === "ready") return null;
    const decision = orNotFound(await findDecision(tx, id));
    return { decision, sheet: await loadSheetRecords(tx, decision), shop: orNotFound(await findShop(tx)), job: orNotFound(await findJob(tx, decision.jobId)) };
  });
  if (!loaded) return;
  const { decision, sheet, shop, job } = loaded;
  try {
    const made = await build(decision, await releaseSheet(decision, sheet, await modelPicture(decision)));
    await inShop(scope, async (tx) => {
      if ((await findPacket(tx, id))?.state === "ready") return;
      await finishPacket(tx, id, made);
      const { part } = decision.manifest!;
      for (const machinist of await listMachinistsOf(tx, job.id)) {
        await queueMail(tx, {
          shopId: shopId!,
          onceKey: `packet:${id}:${machinist.key}`,
          to: machinist.email,
          replyTo: shop.replyTo,
          subject: `${part.name} ${decision.letter}: released to be cut`,
          paragraphs: [
            `${shop.name} released revision ${decision.letter} of ${part.name} (${part.number}), ${part.quantity} ${part.quantity === 1 ? "piece" : "pieces"}.`,
            "The packet holds the STEP, the release sheet and what a STEP does not carry. Cut exactly that, and acknowledge that you have it.",
          ],
          action: { label: "Open the packet", url: `${env.APP_ORIGIN}/packets/${id}` },
        });
      }
      await notify(tx, { shopId: shopId!, jobId: job.id, topic: "packet", id });
      await writeLog(tx, { shopId: shopId!, actorId: null, actor: "Spotblue", action: "made a packet", subjectType: "decision", subjectId: id, jobId: job.id, detail: { sha256: made.sha256, bytes: made.bytes } });
    });
  } catch (fault) {
    await inShop(scope, async (tx) => {
      await notePacketAttempt(tx, id, fault instanceof Error ? fault.message : String(fault));
      await notify(tx, { shopId: shopId!, jobId: job.id, topic: "packet", id });
    });
    throw fault;
  }
}

async function build(decision: Decision, pdf: Buffer): Promise<{ key: string; pdfKey: string; sha256: string; bytes: number }> {
  const manifest = decision.manifest!;
  const folder = manifest.files[0]!.key.split("/files/")[0]!;
  const pdfPath = "sheet/release-sheet.pdf";
  const texts = [
    { path: "gate.json", text: gateSnapshot(decision) },
    { path: "manifest.json", text: packetManifest(manifest) },
  ];
  const sums = packetSums(manifest.files, texts, [{ path: pdfPath, sha256: createHash("sha256").update(pdf).digest("hex") }]);

  // Everything is hashed on its way in: what differs from the manifest never becomes a packet.
  const zip = new yazl.ZipFile();
  const options = { mtime: decision.at, mode: 0o100644, forceDosTimestamp: true };
  const fail = (fault: unknown) => (zip.outputStream as unknown as PassThrough).destroy(fault as Error);
  for (const file of [...manifest.files].sort((a, b) => (a.path < b.path ? -1 : 1))) {
    zip.addReadStreamLazy(file.path, { ...options, size: file.bytes }, (callback) => {
      verified(file).then((stream) => callback(null, stream), (fault: unknown) => { callback(fault, new PassThrough()); fail(fault); });
    });
  }
  zip.addBuffer(pdf, pdfPath, options);
  for (const { path, text } of texts) zip.addBuffer(Buffer.from(text), path, options);
  zip.addBuffer(Buffer.from(sums), "SHA256SUMS", options);
  zip.end();
  zip.on("error", fail);

  const key = `${folder}/packets/${decision.id}.zip`;
  const pdfKey = `${folder}/packets/${decision.id}.pdf`;
  const body = (zip.outputStream as unknown as Readable).pipe(new PassThrough());
  (zip.outputStream as unknown as Readable).on("error", (fault) => body.destroy(fault));
  const stored = await store().put(key, body, { contentType: "application/zip" });
  await store().put(pdfKey, pdf, { contentType: "application/pdf" });
  return { key, pdfKey, ...stored };
}

/** The stored bytes of a sealed file, held against its hash before the first of them is packed. */
async function verified(file: ManifestFile): Promise<Readable> {
  const { sha256, bytes } = await store().hashStored(file.key);
  if (sha256 !== file.sha256 || bytes !== file.bytes) throw new Error(`${file.path} in the store is not the sealed file: its hash differs`);
  return store().get(file.key);
}

async function modelPicture({ manifest }: Decision): Promise<Buffer | null> {
  const file = manifest!.files.find(({ path }) => path.startsWith("sheet/") && path.endsWith(".png"));
  return file ? buffer(await verified(file)) : null;
}
