import { z } from "zod";
import { fluids } from "#app/domain/cautions.ts";

/** The nine lines of the gate, in the order they are shown. */
export const gateLines = ["model", "print", "fit", "calculations", "instructions", "machinist", "customer", "deposit", "cautions"] as const;
export type GateLineName = (typeof gateLines)[number];

/** Shown and asked of every part, whatever its kit says. */
export const alwaysRequiredLines: readonly GateLineName[] = ["model", "cautions"];

const id = z.string().min(1);
const sha256 = z.string().regex(/^[0-9a-f]{64}$/, "must be 64 lower-case hex digits");
const instant = z.iso.datetime({ offset: true });
const text = z.string().trim().min(1);
/** Stated in words ("none" is a statement), or null when nothing was said yet. */
const statement = z.string().trim().min(1).nullable();
const currency = z.string().regex(/^[A-Z]{3}$/, "must be a currency code of three capitals");
const vector = z.tuple([z.number(), z.number(), z.number()]);

const limits = z
  .strictObject({ low: z.number().nullable(), high: z.number().nullable() })
  .refine(({ low, high }) => low === null || high === null || low <= high, "low must not be above high");

const hazardClass = z.enum(["none", "pressure", "burst"]);

const part = z.strictObject({
  id,
  name: text,
  quantity: z.int().positive(),
  /** Lines this part asks for; "model" and "cautions" are asked for whether named here or not. */
  requiredLines: z.array(z.enum(gateLines)),
  requiredCalculations: z.array(z.strictObject({ kind: text, hazard: hazardClass })),
  /** null: not known, or does not apply; false: no. */
  hazards: z.strictObject({
    speed_rpm: z.number().nonnegative().nullable(),
    pressure_MPa: z.number().nonnegative().nullable(),
    temperature_C: z.number().nullable(),
    fluid: z.enum(fluids).nullable(),
    lifting: z.boolean(),
  }),
  /** Hazards that must be stated before this kind of part may go (a rotor: its speed). */
  hazardsToState: z.array(z.enum(["speed_rpm", "pressure_MPa", "temperature_C", "fluid"])),
  /** How far an STL may differ from the STEP: each size of the bounds, and the volume. */
  meshAgreement: z.strictObject({ bounds_mm: z.number().positive(), volume_pct: z.number().positive() }),
});

const revision = z.strictObject({
  id,
  ordinal: z.int().positive(),
  /** The reason, when a person has set it aside. */
  setAside: text.nullable(),
  /** A later revision of the part was released. */
  replaced: z.boolean(),
});

/** A model file that belongs to the revision now; files that were replaced are not listed. */
const modelFile = z.strictObject({
  id,
  kind: z.enum(["step", "stl"]),
  name: text,
  sha256,
  /** The stored bytes were hashed on the server and agree. */
  hashVerified: z.boolean(),
  /** `assumed`: nobody and nothing said so. */
  unit: z.strictObject({ source: text, assumed: z.boolean() }),
  /** Why it can't be measured, when it can't. */
  unreadable: text.nullable(),
  /** null until measured. */
  measured: z
    .strictObject({
      /** STEP: the kernel's check of the solid; STL: null. */
      valid: z.boolean().nullable(),
      closed: z.boolean().nullable(),
      /** Number of solids of a STEP; null for an STL. */
      solids: z.int().nonnegative().nullable(),
      volume_mm3: z.number().nullable(),
      bounds_mm: z.strictObject({ min: vector, max: vector }).nullable(),
      /** Number of recognised holes of a STEP. */
      holes: z.int().nonnegative(),
    })
    .nullable(),
});

const print = z.strictObject({
  id,
  /** "4.1" */
  name: text,
  whole: z.boolean(),
  /** Characteristics a partial print can prove; a whole one proves all. */
  proves: z.array(id),
  /** Hash of the file it was sliced from. */
  modelSha256: sha256,
  /** Why it does not count (warped, wrong material), when it doesn't. */
  spoiled: text.nullable(),
});

/** Every characteristic of the part; one that was set aside comes with `required` false. */
const characteristic = z.strictObject({
  id,
  name: text,
  kind: z.enum(["limits", "min", "max", "yes-no"]),
  unit: text,
  printLimits: limits.nullable(),
  finalLimits: limits.nullable(),
  places: z.int().positive(),
  required: z.boolean(),
  critical: z.boolean(),
  /** False for what only the cut piece can show (surface, hardness): then the gate does not ask a print for it. */
  provableOnPrint: z.boolean(),
  photoRequired: z.boolean(),
  /** The mating part it is tried against; null: whichever the fit check names. */
  matingPart: id.nullable(),
});

const matingPart = z.strictObject({ id, name: text });

const photo = z.strictObject({ id, sha256, hashVerified: z.boolean() });

const fitCheck = z.strictObject({ id, print: id, matingPart: id, at: instant, by: text });

/** What was found: readings in the characteristic's unit, or answers, one a place. */
const found = { readings: z.array(z.number()), answers: z.array(z.boolean()), photos: z.array(id) };

const result = z.strictObject({
  id,
  fitCheck: id,
  characteristic: id,
  ...found,
  instrument: z
    .strictObject({ name: text, uncertainty: z.number().nonnegative().nullable(), trust: z.enum(["calibrated", "checked", "unverified"]) })
    .nullable(),
  /** Why it failed, when it did and somebody has said so. */
  cause: z.enum(["design", "print", "mating-part-reading"]).nullable(),
});

/** Evidence of an earlier revision that still stands; judged again by today's print limits. */
const carryOver = z.strictObject({
  id,
  characteristic: id,
  /** "3" */
  fromRevision: text,
  fromModelSha256: sha256,
  /** The STEP of this revision for which it was worked out or declared. */
  modelSha256: sha256,
  basis: z.enum(["same-model", "declared-unchanged", "computed"]),
  /** Who declared it and why; null unless declared. */
  declared: z.strictObject({ by: text, reason: text }).nullable(),
  /** Largest distance between the faces, where it was computed. */
  distance_mm: z.number().nonnegative().nullable(),
  /** Up to which distance a face counts as unchanged. */
  allowed_mm: z.number().nonnegative().nullable(),
  matingPart: id,
  ...found,
});

const calculation = z.strictObject({
  id,
  kind: text,
  title: text,
  verdict: z.enum(["pass", "fail", "information"]),
  /** Its kind never judges (galvanic, stock …): information is all it gives. */
  informationOnly: z.boolean(),
  /** Computed from the inputs as they are now. */
  inputsCurrent: z.boolean(),
  /** The STEP it took values from; null when it took none. */
  modelSha256: sha256.nullable(),
  hazard: hazardClass,
});

const instructions = z.strictObject({
  id,
  generalTolerance: statement,
  datums: statement,
  criticalSurfaces: statement,
  edgeBreak: statement,
  coating: statement,
  /** The STEP they were confirmed for, by whom; null until confirmed. */
  confirmed: z.strictObject({ by: text, at: instant, modelSha256: sha256 }).nullable(),
});

const holeInstruction = z.strictObject({
  id,
  /** "6 × Ø 6.60 through" */
  label: text,
  /** Indices into the recognised holes of the STEP. */
  holes: z.array(z.int().nonnegative()),
  treatment: z.enum(["tap", "clearance", "ream", "leave"]).nullable(),
});

const question = z.strictObject({ id, text, /** No longer asked; kept for the answers it has. */ retired: z.boolean() });

const machinistAnswer = z.strictObject({
  id,
  /** null: an objection or remark beside the questions. */
  question: id.nullable(),
  stance: z.enum(["agree", "object"]),
  text: z.string(),
  by: text,
  at: instant,
  /** The STEP the machinist saw. */
  modelSha256: sha256,
  /** How an objection was closed, by whom; null while it is not. */
  closed: z.strictObject({ by: text, how: text, at: instant }).nullable(),
});

/** Answers to earlier models and revisions are listed too: a later reconfirmation builds on them. */
const customerAnswer = z.strictObject({
  id,
  answer: z.enum(["approved", "refused", "reconfirmed"]),
  reason: z.string().nullable(),
  by: text,
  at: instant,
  /** The STEP the customer saw. */
  modelSha256: sha256,
  /** The earlier answer a reconfirmation builds on, and whether what changed since was shown. */
  since: z.strictObject({ answer: id, changesSeen: z.boolean() }).nullable(),
  /** null: the customer's own click; else how it came, recorded by the shop. */
  recorded: z.strictObject({ how: z.enum(["text-message", "e-mail", "call", "in-person", "letter"]), on: z.iso.date(), by: text, picture: id.nullable() }).nullable(),
});

const callout = z.strictObject({ id, text, byCustomer: z.boolean(), open: z.boolean() });

const deposit = z.strictObject({
  id,
  currency,
  /** Minor units (cents); null while nothing is agreed. */
  agreed_minor: z.int().nonnegative().nullable(),
  /** Why none is asked, recorded by the owner. */
  waived: z.strictObject({ by: text, reason: text }).nullable(),
});

/** Money that has arrived; a refund is negative. */
const payment = z.strictObject({ id, currency, amount_minor: z.int(), how: z.enum(["card", "recorded"]), at: instant });

/** Cautions somebody has read, each with the basis it had then. */
const acknowledgement = z.strictObject({ id, by: text, at: instant, cautions: z.array(z.strictObject({ code: text, basis: text })) });

const concession = z.strictObject({
  id,
  lines: z.array(z.enum(gateLines)).min(1),
  reason: text,
  by: text,
  at: instant,
  /** One of the two at least. */
  limit: z
    .strictObject({ pieces: z.int().positive().nullable(), until: z.iso.date().nullable() })
    .refine(({ pieces, until }) => pieces !== null || until !== null, "a concession needs a limit: pieces, or until a date"),
  outsideApproval: z.strictObject({ name: text, organisation: text, reference: text, on: z.iso.date() }).nullable(),
});

/**
 * Everything the gate looks at, as one plain document. Every record has an `id`, unique in the
 * document. References may dangle: the line that needs the record is then open.
 */
export const gateRecords = z
  .strictObject({
    part,
    revision,
    models: z.array(modelFile),
    characteristics: z.array(characteristic),
    matingParts: z.array(matingPart),
    photos: z.array(photo),
    prints: z.array(print),
    fitChecks: z.array(fitCheck),
    results: z.array(result),
    carryOvers: z.array(carryOver),
    calculations: z.array(calculation),
    instructions: instructions.nullable().default(null),
    holeInstructions: z.array(holeInstruction),
    questions: z.array(question),
    machinistAnswers: z.array(machinistAnswer),
    customerAnswers: z.array(customerAnswer),
    callouts: z.array(callout),
    deposit: deposit.nullable().default(null),
    payments: z.array(payment),
    acknowledgements: z.array(acknowledgement),
    concessions: z.array(concession),
  })
  .superRefine((records, context) => {
    const seen = new Set<string>();
    for (const { key, record } of listRecords(records)) {
      if (seen.has(record.id)) context.addIssue({ code: "custom", path: [key], message: `the id "${record.id}" stands twice` });
      seen.add(record.id);
    }
  });

export type GateRecords = z.infer<typeof gateRecords>;
export type GateRecordKey = keyof GateRecords;

/** Every record of the document with the key it stands under, in document order. */
export function listRecords(records: GateRecords): { key: GateRecordKey; record: { id: string } }[] {
  return (Object.keys(records) as GateRecordKey[]).flatMap((key) => {
    const value = records[key];
    if (value === null) return [];
    return (Array.isArray(value) ? value : [value]).map((record) => ({ key, record }));
  });
}

export type GateModelFile = z.infer<typeof modelFile>;
export type GatePrint = z.infer<typeof print>;
export type GateCharacteristic = z.infer<typeof characteristic>;
export type GateResult = z.infer<typeof result>;
export type GateCarryOver = z.infer<typeof carryOver>;
export type GateConcession = z.infer<typeof concession>;
