import { gateRecords, type GateRecords } from "#app/domain/gate-records.ts";
import type { Fluid } from "#app/domain/cautions.ts";
import { listRevisionFiles, type ModelFile } from "./files.server.ts";
import { findJob } from "./jobs.server.ts";
import { findPart } from "./parts.server.ts";
import { findRevision } from "./revisions.server.ts";
import { toNumber, type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

/** What follows from the kind of part, and not from its records. */
export interface GateRules {
  hazardsToState: (kit: string) => GateRecords["part"]["hazardsToState"];
  informationOnly: (calculation: string) => boolean;
  meshAgreement: GateRecords["part"]["meshAgreement"];
}

const iso = (date: Date) => date.toISOString();
const numbers = (texts: NumericText[]) => texts.map(Number);
/** "none" is a statement; nothing said yet is not. */
const statement = (text: string) => text.trim() || null;

/**
 * Everything the gate looks at for one revision, as the plain document its function takes. The
 * page, the decision and the packet all read it here, in a constant number of queries.
 *
 * @returns undefined when there is no such revision in the viewer's scope
 */
export async function loadGateRecords(tx: Tx, revisionId: string, rules: GateRules): Promise<GateRecords | undefined> {
  const revision = await findRevision(tx, revisionId);
  if (!revision) return undefined;
  const part = (await findPart(tx, revision.partId))!;
  const job = (await findJob(tx, revision.jobId))!;
  const files = await listRevisionFiles(tx, revisionId);
  const of = (table: string) => tx(table).where(`${table}.revision_id`, revisionId).orderBy(`${table}.id`);
  const photos = await tx("fit_photos").join("files", "files.id", "fit_photos.file_id").where("fit_photos.revision_id", revisionId).select("files.id", "files.sha256", "files.state", "fit_photos.fit_check_id", "fit_photos.characteristic_id");
  const results = await of("fit_results").leftJoin("instruments", "instruments.id", "fit_results.instrument_id").join("fit_checks", "fit_checks.id", "fit_results.fit_check_id").select("fit_results.*", "instruments.name as instrument_name", "instruments.trust", "fit_checks.cause");
  const carried = await loadCarryOvers(tx, revisionId);
  const { answers, callouts, pictures } = await loadAnswers(tx, revision.partId, revisionId);
  const instructions = await tx("instructions").where({ revision_id: revisionId }).first();
  const machinist = await tx("machinist_answers").join("machinist_replies", "machinist_replies.id", "machinist_answers.reply_id").where("machinist_answers.revision_id", revisionId).select("machinist_answers.*", "machinist_replies.by_name", "machinist_replies.at", "machinist_replies.model_sha256");
  const questions = await tx("makeability_questions").orderBy("sort");
  const replaced = await tx("decisions").join("revisions", "revisions.id", "decisions.revision_id").where("decisions.part_id", part.id).whereNotNull("decisions.letter").where("revisions.ordinal", ">", revision.ordinal).first("decisions.id");
  const shop = await tx("shops").first("currency");

  const records: GateRecords = {
    part: {
      id: part.id,
      name: part.name,
      quantity: part.quantity,
      requiredLines: part.requiredLines,
      requiredCalculations: part.requiredCalculations,
      hazards: { speed_rpm: part.speedRpm, pressure_MPa: part.pressureMPa, temperature_C: part.temperatureC, fluid: part.fluid as Fluid | null, lifting: part.lifting },
      hazardsToState: rules.hazardsToState(part.kit),
      meshAgreement: rules.meshAgreement,
    },
    revision: { id: revision.id, ordinal: revision.ordinal, setAside: revision.setAsideReason, replaced: replaced !== undefined },
    models: files.filter(({ role }) => role === "step" || role === "stl").map(toModel),
    characteristics: (await tx("characteristics").where({ part_id: part.id }).orderBy("sort").orderBy("id")).map((row) => ({
      id: row.id,
      name: row.name,
      // A fit class was turned into its limits when it was saved.
      kind: row.kind === "fit" ? "limits" : row.kind,
      unit: row.kind === "yes-no" ? "answer" : "mm",
      printLimits: limitsOf(row.print_lower_mm, row.print_upper_mm),
      finalLimits: limitsOf(row.lower_mm, row.upper_mm),
      places: row.places,
      required: row.required && row.set_aside_at === null,
      critical: row.critical,
      provableOnPrint: row.provable_on_print,
      photoRequired: row.photo_required,
      matingPart: row.mating_part_id,
    })),
    matingParts: await tx("mating_parts").where({ job_id: job.id }).orderBy("id").select("id", "name"),
    photos: [...photos, ...carried.photos, ...pictures].map((row) => ({ id: row.id, sha256: row.sha256, hashVerified: row.state === "stored" })).filter(firstOfId()),
    prints: await loadPrints(tx, revision.ordinal, revisionId),
    fitChecks: (await of("fit_checks")).map((row) => ({ id: row.id, print: row.print_id, matingPart: row.mating_part_id, at: iso(row.at), by: row.by_name })),
    results: results.map((row) => ({
      id: row.id,
      fitCheck: row.fit_check_id,
      characteristic: row.characteristic_id,
      readings: numbers(row.readings_mm),
      answers: row.answers,
      photos: photos.filter((photo) => photo.fit_check_id === row.fit_check_id && (photo.characteristic_id === row.characteristic_id || photo.characteristic_id === null)).map((photo) => photo.id),
      instrument: row.instrument_name === null ? null : { name: row.instrument_name, uncertainty: toNumber(row.uncertainty_mm), trust: row.trust },
      cause: row.cause === "misread" ? "mating-part-reading" : row.cause,
    })),
    carryOvers: carried.records,
    calculations: (await of("calculations").whereNull("removed_at")).map((row) => ({
      id: row.id,
      kind: row.kind,
      title: row.title,
      verdict: row.verdict,
      informationOnly: rules.informationOnly(row.kind),
      inputsCurrent: true,
      modelSha256: row.model_sha256,
      hazard: row.hazard,
    })),
    instructions: instructions
      ? {
          id: `instructions-${revisionId}`,
          generalTolerance: statement(instructions.general_tolerance),
          datums: statement(instructions.datums),
          criticalSurfaces: statement(instructions.critical_surfaces),
          edgeBreak: statement(instructions.edge_break),
          coating: statement(instructions.coating),
          confirmed: instructions.confirmed_at ? { by: instructions.confirmed_name, at: iso(instructions.confirmed_at), modelSha256: instructions.model_sha256 } : null,
        }
      : null,
    holeInstructions: (await of("instruction_holes")).map((row) => ({ id: row.id, label: row.label, holes: row.holes, treatment: row.treatment })),
    questions: questions.map((row) => ({ id: row.id, text: row.question, retired: row.set_aside_at !== null })),
    machinistAnswers: machinist.map((row) => ({
      id: row.id,
      question: row.question_id,
      stance: row.stance,
      text: row.text,
      by: row.by_name,
      at: iso(row.at),
      modelSha256: row.model_sha256,
      closed: row.closed_at ? { by: row.closed_by_name, how: row.closed_how, at: iso(row.closed_at) } : null,
    })),
    customerAnswers: answers,
    callouts,
    deposit: {
      id: `deposit-${job.id}`,
      currency: shop.currency,
      agreed_minor: job.depositAgreedMinor,
      waived: job.depositNoneReason === null ? null : { by: "owner", reason: job.depositNoneReason },
    },
    payments: (await tx("payments").where({ job_id: job.id }).orderBy("id")).map((row) => ({ id: row.id, currency: shop.currency, amount_minor: Number(row.amount_minor), how: "recorded", at: iso(row.created_at) })),
    acknowledgements: (await of("caution_reads")).map((row) => ({ id: row.id, by: row.by_name, at: iso(row.at), cautions: [{ code: row.caution, basis: row.basis }] })),
    concessions: (await of("concessions").whereNull("withdrawn_at").select("concessions.*", tx.raw("to_char(limit_until, 'YYYY-MM-DD') as until"))).map((row) => ({
      id: row.id,
      lines: row.lines,
      reason: row.reason,
      by: row.by_name,
      at: iso(row.at),
      limit: { pieces: row.limit_pieces, until: row.until },
      outsideApproval: row.outside_approval,
    })),
  };
  // The rows were checked when they were written; what the rule function takes is checked here once more.
  return gateRecords.parse(records);
}

const limitsOf = (low: NumericText | null, high: NumericText | null) => (low === null && high === null ? null : { low: toNumber(low), high: toNumber(high) });

function firstOfId() {
  const seen = new Set<string>();
  return ({ id }: { id: string }) => !seen.has(id) && seen.add(id) !== undefined;
}

function toModel(file: ModelFile): GateRecords["models"][number] {
  const { measure } = file;
  const document = measure?.document ?? null;
  return {
    id: file.id,
    kind: file.role as "step" | "stl",
    name: file.name,
    sha256: file.sha256,
    hashVerified: file.state === "stored",
    unit: document ? { source: document.unit.source, assumed: document.unit.assumed } : { source: file.unit ?? "mm", assumed: file.unit === null },
    unreadable: measure?.state === "failed" ? (measure.reason ?? "it can't be read") : null,
    measured: document && measure?.state === "done" ? measuredOf(document) : null,
  };
}

function measuredOf(document: NonNullable<NonNullable<ModelFile["measure"]>["document"]>): GateRecords["models"][number]["measured"] {
  const { solid } = document;
  return {
    valid: solid ? solid.valid : null,
    // A valid solid of a B-rep is closed by the kernel's own check.
    closed: solid ? solid.solids > 0 && solid.valid : (document.mesh?.closed ?? null),
    solids: solid ? solid.solids : null,
    volume_mm3: document.volume_mm3,
    bounds_mm: document.bounds_mm && { min: document.bounds_mm.min, max: document.bounds_mm.max },
    holes: document.holes.length,
  };
}

async function loadPrints(tx: Tx, ordinal: number, revisionId: string): Promise<GateRecords["prints"]> {
  const rows = await tx("prints")
    .where({ revision_id: revisionId })
    .orderBy("ordinal")
    .select("prints.*", tx.raw("(select coalesce(array_agg(p.characteristic_id order by p.characteristic_id), '{}') from print_proves p where p.print_id = prints.id) as proves"));
  return rows.map((row) => ({ id: row.id, name: `${ordinal}.${row.ordinal}`, whole: row.whole, proves: row.proves, modelSha256: row.model_sha256, spoiled: row.spoiled }));
}

/** Carried-over evidence with the results it carries, and the photos those rest on. */
async function loadCarryOvers(tx: Tx, revisionId: string) {
  const rows = await tx("carry_overs as c")
    .join("revisions as r", "r.id", "c.from_revision_id")
    .where("c.revision_id", revisionId)
    .orderBy("c.id")
    .select("c.*", "r.ordinal")
    .joinRaw(
      `left join lateral (
         select fr.readings_mm, fr.answers, fr.fit_check_id, fc.mating_part_id from fit_results fr join fit_checks fc on fc.id = fr.fit_check_id
           join prints p on p.id = fc.print_id and p.spoiled is null
         where fr.revision_id = c.from_revision_id and fr.characteristic_id = c.characteristic_id order by fc.at desc, fc.id limit 1) found on true`,
    )
    .select("found.*");
  const checks = rows.map((row) => row.fit_check_id).filter(Boolean);
  const photos = checks.length === 0 ? [] : await tx("fit_photos").join("files", "files.id", "fit_photos.file_id").whereIn("fit_photos.fit_check_id", checks).select("files.id", "files.sha256", "files.state", "fit_photos.fit_check_id", "fit_photos.characteristic_id");
  const records: GateRecords["carryOvers"] = rows
    .filter((row) => row.fit_check_id !== null)
    .map((row) => ({
      id: row.id,
      characteristic: row.characteristic_id,
      fromRevision: String(row.ordinal),
      fromModelSha256: row.from_model_sha256,
      modelSha256: row.model_sha256,
      basis: row.basis,
      declared: row.basis === "declared-unchanged" ? { by: row.by_name, reason: row.reason } : null,
      distance_mm: toNumber(row.distance_mm),
      allowed_mm: toNumber(row.allowed_mm),
      matingPart: row.mating_part_id,
      readings: numbers(row.readings_mm),
      answers: row.answers,
      photos: photos.filter((photo) => photo.fit_check_id === row.fit_check_id && (photo.characteristic_id === row.characteristic_id || photo.characteristic_id === null)).map((photo) => photo.id),
    }));
  return { records, photos };
}

/** The customer's answers to any revision of the part, since a reconfirmation builds on an earlier one, and this revision's callouts. */
async function loadAnswers(tx: Tx, partId: string, revisionId: string) {
  const rows = await tx("customer_answers as a")
    .join("revisions as r", "r.id", "a.revision_id")
    .where("r.part_id", partId)
    .orderBy("a.at")
    .select("a.*", tx.raw("to_char(a.said_on, 'YYYY-MM-DD') as said"));
  const answers: GateRecords["customerAnswers"] = rows.map((row) => ({
    id: row.id,
    answer: row.answer,
    reason: row.reason || null,
    by: row.by_name,
    at: iso(row.at),
    modelSha256: row.model_sha256,
    since: row.since_answer_id ? { answer: row.since_answer_id, changesSeen: row.changes_seen } : null,
    recorded: row.recorded_how ? { how: row.recorded_how, on: row.said, by: row.recorded_by_name, picture: row.picture_file_id } : null,
  }));
  const found = await tx("callouts").where({ revision_id: revisionId }).orderBy("id");
  const callouts: GateRecords["callouts"] = found.map((row) => ({ id: row.id, text: row.body, byCustomer: row.from_customer, open: row.closed_at === null }));
  const pictures = await tx("files").whereIn("id", rows.map((row) => row.picture_file_id).filter(Boolean)).select("id", "sha256", "state");
  return { answers, callouts, pictures };
}
