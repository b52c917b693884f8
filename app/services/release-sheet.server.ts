import { createRequire } from "node:module";
import { buffer } from "node:stream/consumers";
import PDFDocument from "pdfkit";
import type { Decision } from "#app/data/decisions.server.ts";
import type { SheetRecords } from "#app/data/sheet-records.server.ts";
import { cautionsFor } from "#app/domain/cautions.ts";
import type { GateRecords } from "#app/domain/gate-records.ts";
import type { ReleaseManifest } from "#app/domain/manifest.ts";
import { createSheetWriter, type SheetWriter } from "./sheet-writer.server.ts";

const require = createRequire(import.meta.url);
const font = (name: string) => require.resolve(`@fontsource/${name}`);

/**
 * The release sheet: what was released, by whom, and what a STEP does not carry, on A4.
 *
 * Made of sealed records alone, with the decision's time for its date, so that it comes out
 * the same to the byte whenever it is made.
 *
 * @param picture PNG of the model, where one was drawn
 */
export async function releaseSheet(decision: Decision, sheet: SheetRecords, picture: Buffer | null): Promise<Buffer> {
  const manifest = decision.manifest!;
  const title = `${manifest.part.name} ${manifest.revision.letter}`;
  const pdf = new PDFDocument({
    size: "A4",
    margins: { top: 48, bottom: 64, left: 48, right: 48 },
    bufferPages: true,
    info: { Title: `Release sheet: ${title}`, Author: manifest.shop.name, Creator: "Spotblue", Producer: "Spotblue", CreationDate: decision.at, ModDate: decision.at },
  });
  pdf.registerFont("text", font("barlow/files/barlow-latin-400-normal.woff"));
  pdf.registerFont("bold", font("barlow/files/barlow-latin-600-normal.woff"));
  pdf.registerFont("label", font("barlow-semi-condensed/files/barlow-semi-condensed-latin-500-normal.woff"));
  const done = buffer(pdf);
  const write = createSheetWriter(pdf);

  write.heading(`${title}: released to be cut`);
  write.text(`${manifest.part.number}, revision ${manifest.revision.ordinal}, ${manifest.part.quantity} ${manifest.part.quantity === 1 ? "piece" : "pieces"}. ${manifest.revision.reason}.`);
  if (picture) write.picture(picture, 190);
  titleBlock(write, manifest, sheet);
  concessions(write, decision);
  instructions(write, sheet);
  characteristics(write, decision.records);
  results(write, decision.records);
  calculations(write, sheet);
  signatures(write, manifest);
  cautions(write, decision.records);
  write.footers(`${manifest.shop.name} · ${title} · decision ${decision.id}`);
  pdf.end();
  return done;
}

function titleBlock(write: SheetWriter, { shop, job, part, revision, decision }: ReleaseManifest, { measure }: SheetRecords): void {
  const size = measure?.bounds_mm ? measure.bounds_mm.size.map((mm) => mm.toFixed(2)).join(" × ") + " mm" : "not measured";
  write.cells([
    ["Part", part.name], ["Number", part.number ?? ""], ["Revision", `${revision.letter} (${revision.ordinal})`],
    ["Shop", shop.name], ["Job", `${job.number} ${job.title}`], ["Stock", part.material ?? "as agreed"],
    ["Size", size], ["Volume", measure?.volume_mm3 ? `${(measure.volume_mm3 / 1000).toFixed(3)} cm³` : ""], ["Decision", decision.decision],
  ]);
}

function concessions(write: SheetWriter, { records, lines }: Decision): void {
  const used = new Set(lines.filter(({ state }) => state === "conceded").flatMap(({ by }) => by));
  const granted = records.concessions.filter(({ id }) => used.has(id));
  if (granted.length === 0) return;
  write.section("Concessions");
  for (const { lines: conceded, reason, by, limit, outsideApproval } of granted) {
    const limits = [limit.pieces === null ? "" : `${limit.pieces} ${limit.pieces === 1 ? "piece" : "pieces"}`, limit.until === null ? "" : `until ${limit.until}`].filter(Boolean).join(", ");
    write.text(`${conceded.join(", ")}: ${reason}. Limited to ${limits}. Conceded by ${by}.`);
    if (outsideApproval) write.text(`Approved outside by ${outsideApproval.name}, ${outsideApproval.organisation}, ${outsideApproval.reference}, ${outsideApproval.on}.`);
  }
}

const treatments: Record<string, string> = { tap: "tap", clearance: "clearance", ream: "ream", leave: "leave as modelled" };

function instructions(write: SheetWriter, { instructions: stated, holes }: SheetRecords): void {
  write.section("Instructions");
  if (!stated) return write.text("None were stated.");
  write.facts([
    ["General tolerance", stated.generalTolerance], ["Datums", stated.datums], ["Critical surfaces", stated.criticalSurfaces],
    ["Edges", stated.edgeBreak], ["Coating", stated.coating], ["Confirmed by", stated.confirmedName ?? ""],
  ]);
  if (holes.length > 0) write.table(["Holes", "What to do", "To"], holes.map(({ label, treatment, spec }) => [label, treatments[treatment ?? ""] ?? "", spec]), [3, 2, 2]);
}

const limitsText = (limits: { low: number | null; high: number | null } | null) =>
  limits === null ? "" : limits.low === null ? `at most ${limits.high}` : limits.high === null ? `at least ${limits.low}` : `${limits.low} to ${limits.high}`;

function characteristics(write: SheetWriter, records: GateRecords): void {
  const shown = records.characteristics.filter(({ required, finalLimits, kind }) => required && (kind === "yes-no" || finalLimits !== null));
  if (shown.length === 0) return;
  write.section("Characteristics of the cut piece");
  write.table(
    ["Characteristic", "Limits, mm", "Places", "Critical"],
    shown.map(({ name, kind, finalLimits, places, critical }) => [name, kind === "yes-no" ? "yes or no" : limitsText(finalLimits), String(places), critical ? "yes" : ""]),
    [4, 3, 1, 1],
  );
}

function results(write: SheetWriter, records: GateRecords): void {
  if (records.results.length === 0) return;
  write.section("What the prints showed");
  const nameOf = (id: string) => records.characteristics.find((one) => one.id === id)?.name ?? "";
  const printOf = (fitCheck: string) => records.prints.find(({ id }) => id === records.fitChecks.find((check) => check.id === fitCheck)?.print)?.name ?? "";
  write.table(
    ["Characteristic", "Print", "Found"],
    records.results.map(({ characteristic, fitCheck, readings, answers }) => [nameOf(characteristic), printOf(fitCheck), [...readings.map(String), ...answers.map((yes) => (yes ? "yes" : "no"))].join(", ")]),
    [4, 1, 3],
  );
}

function calculations(write: SheetWriter, { calculations: done }: SheetRecords): void {
  if (done.length === 0) return;
  write.section("Calculations");
  write.table(["Calculation", "Verdict", "Room left"], done.map(({ title, verdict, room }) => [title, verdict, room]), [4, 1, 2]);
}

function signatures(write: SheetWriter, { signatures: signed, decision }: ReleaseManifest): void {
  write.section("Decision");
  for (const { name, at, meaning, part, by } of signed) write.text(`${name}, ${at.slice(0, 16).replace("T", " ")} UTC, ${part}: “${meaning}” Signed in again by ${by}.`);
  if (decision.samePerson) write.text("Proposer and decider are the same person.");
}

function cautions(write: SheetWriter, { part }: GateRecords): void {
  write.section("Cautions");
  for (const { title, text } of cautionsFor(part.hazards)) write.facts([[title, text]]);
}
