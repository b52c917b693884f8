import { canonicalJson } from "#app/domain/canonical.ts";
import { listRecords, type GateRecordKey, type GateRecords } from "#app/domain/gate-records.ts";

export interface RecordChange {
  /** A sentence for people. */
  what: string;
  key: GateRecordKey;
  /** The record it is about, as it is called now, or was. */
  id: string;
}

/**
 * What happened to the records between two looks at them? For the owner whose click came after a
 * change: each record that was added, taken away or altered, in the order of the document.
 *
 * @returns nothing when the two have the same hash
 */
export function describeChanges(before: GateRecords, after: GateRecords): RecordChange[] {
  const were = recordsById(before);
  const are = recordsById(after);
  const changes: RecordChange[] = [];
  const replaced = new Set<string>();

  // A model that left while one of its kind came was replaced: one sentence says more than two.
  for (const now of after.models) {
    if (were.has(now.id)) continue;
    const gone = before.models.find((was) => was.kind === now.kind && !are.has(was.id) && !replaced.has(was.id));
    if (gone === undefined) continue;
    replaced.add(gone.id).add(now.id);
    changes.push({ what: `an upload replaced the ${now.kind.toUpperCase()} ${gone.name}${gone.name === now.name ? "" : ` by ${now.name}`}`, key: "models", id: now.id });
  }
  for (const [id, { key, record }] of are) {
    if (replaced.has(id)) continue;
    const was = were.get(id);
    if (was === undefined) {
      changes.push({ what: `${nameRecord(key, record, after)} was added`, key, id });
      continue;
    }
    const fields = changedFields(was.record, record);
    if (fields.length > 0) changes.push({ what: sentenceOfChange(key, record, fields, was.record, after), key, id });
  }
  for (const [id, { key, record }] of were) {
    if (!are.has(id) && !replaced.has(id)) changes.push({ what: `${nameRecord(key, record, before)} was taken away`, key, id });
  }
  return changes;
}

type PlainRecord = { id: string } & { [field: string]: unknown };

function recordsById(records: GateRecords): Map<string, { key: GateRecordKey; record: PlainRecord }> {
  return new Map(listRecords(records).map(({ key, record }) => [record.id, { key, record: record as PlainRecord }]));
}

function changedFields(was: PlainRecord, is: PlainRecord): string[] {
  const fields = new Set([...Object.keys(was), ...Object.keys(is)]);
  return [...fields].filter((field) => canonicalJson(was[field] ?? null) !== canonicalJson(is[field] ?? null));
}

function sentenceOfChange(key: GateRecordKey, record: PlainRecord, fields: string[], was: PlainRecord, records: GateRecords): string {
  const name = nameRecord(key, record, records);
  if (key === "callouts" && fields.includes("open")) return `${name} was ${record.open === true ? "opened again" : "closed"}`;
  if (key === "prints" && fields.includes("spoiled") && record.spoiled !== null) return `${name} no longer counts: ${String(record.spoiled)}`;
  if (key === "revision" && fields.includes("setAside")) return record.setAside === null ? "the revision was taken up again" : `the revision was set aside: ${String(record.setAside)}`;
  if (key === "models" && fields.includes("sha256")) return `an upload replaced the ${String(record.kind).toUpperCase()} ${String(was.name)}`;
  return `${name} changed: ${fields.map(fieldInWords).join(", ")}`;
}

/** "printLimits" reads "print limits", "speed_rpm" reads "speed rpm". */
function fieldInWords(field: string): string {
  return field.replace(/_(?:minor|mm)$/, "").replaceAll("_", " ").replace(/([a-z])([A-Z])/g, (_, a: string, b: string) => `${a} ${b.toLowerCase()}`);
}

function nameRecord(key: GateRecordKey, record: PlainRecord, records: GateRecords): string {
  const nameOf = (id: unknown) => records.characteristics.find((one) => one.id === id)?.name ?? "a characteristic";
  const printOf = (id: unknown) => records.prints.find((one) => one.id === id)?.name;
  switch (key) {
    case "part":
      return "the part";
    case "revision":
      return "the revision";
    case "models":
      return `the ${String(record.kind).toUpperCase()} ${String(record.name)}`;
    case "characteristics":
      return `the characteristic ${String(record.name)}`;
    case "matingParts":
      return `the mating part ${String(record.name)}`;
    case "photos":
      return "a photo";
    case "prints":
      return `print ${String(record.name)}`;
    case "fitChecks": {
      const print = printOf(record.print);
      return print === undefined ? "a fit check" : `a fit check of print ${print}`;
    }
    case "results":
      return `a result of ${nameOf(record.characteristic)}`;
    case "carryOvers":
      return `the carry-over of ${nameOf(record.characteristic)} from revision ${String(record.fromRevision)}`;
    case "calculations":
      return `the calculation ${String(record.title)}`;
    case "instructions":
      return "the instructions";
    case "holeInstructions":
      return `the instruction for ${String(record.label)}`;
    case "questions":
      return `the makeability question "${String(record.text)}"`;
    case "machinistAnswers":
      return record.stance === "object" ? "an objection of the machinist" : "an answer of the machinist";
    case "customerAnswers":
      return `the customer's answer (${String(record.answer)})`;
    case "callouts":
      return `the callout "${String(record.text)}"`;
    case "deposit":
      return "the deposit";
    case "payments":
      return Number(record.amount_minor) < 0 ? "a refund" : "a payment";
    case "acknowledgements":
      return "a reading of the cautions";
    case "concessions":
      return `the concession on ${(record.lines as string[]).join(", ")}`;
  }
}
