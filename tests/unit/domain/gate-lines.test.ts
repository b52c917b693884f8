import { describe, expect, test } from "vitest";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { gateRecords, type GateLineName, type GateRecords } from "#app/domain/gate-records.ts";
import { evaluateGate } from "#app/domain/gate.ts";

const now = new Date("2026-05-04T12:00:00Z");
const otherSha256 = "ab".repeat(32);

/** The example with one change, checked to be a document that could have come from the database. */
function changed(change: (records: GateRecords) => void): GateRecords {
  const records = structuredClone(exampleGateRecords);
  change(records);
  return gateRecords.parse(records);
}

function lineOf(records: GateRecords, line: GateLineName) {
  return evaluateGate(records, now).lines.find((one) => one.line === line)!;
}

type Case = [why: string, change: (records: GateRecords) => void, state: "met" | "open" | "failed", what?: string, who?: string, action?: string];

function cases(line: GateLineName, list: Case[]): void {
  describe(line, () => {
    test.each(list)("%s", (_, change, state, what, who, action) => {
      const records = changed(change);
      const found = lineOf(records, line);
      expect(found.state).toBe(state);
      if (state === "met") expect(found.missing).toEqual([]);
      else expect(found.missing[0]).toMatchObject({ what, who, action, failed: state === "failed" });
      expect(evaluateGate(records, now).verdict === "go").toBe(evaluateGate(records, now).lines.every((one) => one.state === "met"));
    });
  });
}

const step = (records: GateRecords) => records.models[0]!;
const stl = (records: GateRecords) => records.models[1]!;

cases("model", [
  ["a second STEP", (r) => void r.models.push({ ...step(r), id: "model-step-2", name: "other.step", sha256: otherSha256 }), "open", "more than one STEP is stored (filler-flange-4.step, other.step): one file must define the part", "designer", "upload-step"],
  ["stored bytes not verified", (r) => void (step(r).hashVerified = false), "open", "filler-flange-4.step: the stored bytes are not verified yet", "designer", "wait-for-measuring"],
  ["not measured yet", (r) => void (step(r).measured = null), "open", "filler-flange-4.step is not measured yet", "designer", "wait-for-measuring"],
  ["unreadable", (r) => void (step(r).unreadable = "it ends in the middle"), "failed", "filler-flange-4.step can't be read: it ends in the middle", "designer", "repair-model"],
  ["an unstated unit", (r) => void (step(r).unit.assumed = true), "open", "filler-flange-4.step does not state its unit", "designer", "state-unit"],
  ["no solid", (r) => void (step(r).measured!.solids = 0), "failed", "filler-flange-4.step holds no solid", "designer", "repair-model"],
  ["an invalid solid", (r) => void (step(r).measured!.valid = false), "failed", "the solid of filler-flange-4.step is not valid", "designer", "repair-model"],
  ["validity not known", (r) => void (step(r).measured!.valid = null), "failed", "the solid of filler-flange-4.step is not valid", "designer", "repair-model"],
  ["an open solid", (r) => void (step(r).measured!.closed = false), "failed", "the solid of filler-flange-4.step is not closed", "designer", "repair-model"],
  ["an STL whose unit nobody stated", (r) => void (stl(r).unit.assumed = true), "open", "the unit of filler-flange-4.stl is assumed to be mm, nobody has said so", "designer", "state-unit"],
  ["an open STL", (r) => void (stl(r).measured!.closed = false), "failed", "filler-flange-4.stl is not closed, so its volume can't be compared with the STEP", "designer", "upload-stl"],
  ["bounds exactly on the tolerance", (r) => void (stl(r).measured!.bounds_mm = { min: [-45, -45, 0], max: [45.1, 45, 12] }), "met"],
  ["bounds a hundredth beyond", (r) => void (stl(r).measured!.bounds_mm = { min: [-45, -45, 0], max: [45.11, 45, 12] }), "failed", "filler-flange-4.stl is not the shape of the STEP: along x it measures 90.11 mm, the STEP 90.00 mm (allowed 0.1 mm)", "designer", "upload-stl"],
  ["the same shape moved", (r) => void (stl(r).measured!.bounds_mm = { min: [100, 0, 0], max: [190, 90, 12] }), "met"],
  ["volume exactly on the tolerance", (r) => void (stl(r).measured!.volume_mm3 = 41250 * 1.005), "met"],
  ["volume beyond it, above", (r) => void (stl(r).measured!.volume_mm3 = 41250 * 1.0051), "failed", "filler-flange-4.stl is not the shape of the STEP: its volume is 0.51 % larger (allowed 0.5 %)", "designer", "upload-stl"],
  ["volume beyond it, below", (r) => void (stl(r).measured!.volume_mm3 = 41250 * 0.9949), "failed", "filler-flange-4.stl is not the shape of the STEP: its volume is 0.51 % smaller (allowed 0.5 %)", "designer", "upload-stl"],
  ["an inch file read as mm", (r) => void (stl(r).measured!.bounds_mm = { min: [0, 0, 0], max: [90 / 25.4, 90 / 25.4, 12 / 25.4] }), "failed", "filler-flange-4.stl is not the shape of the STEP: along x it measures 3.54 mm, the STEP 90.00 mm (allowed 0.1 mm)", "designer", "upload-stl"],
  ["a partial print smaller than the part", (r) => { r.prints[0]!.whole = false; r.prints[0]!.proves = ["characteristic-spigot"]; stl(r).measured!.bounds_mm = { min: [0, 0, 0], max: [90, 90, 3] }; stl(r).measured!.volume_mm3 = 9000; }, "met"],
  ["a partial print larger than the part", (r) => { r.prints[0]!.whole = false; r.prints[0]!.proves = ["characteristic-spigot"]; stl(r).measured!.bounds_mm = { min: [0, 0, 0], max: [90, 90, 30] }; }, "failed", "filler-flange-4.stl is not the shape of the STEP: along z it measures 30.00 mm, the STEP 12.00 mm (allowed 0.1 mm)", "designer", "upload-stl"],
  ["a differing STL that no print was made from", (r) => void r.models.push({ ...stl(r), id: "model-stl-2", sha256: otherSha256, measured: { ...stl(r).measured!, volume_mm3: 1 } }), "met"],
]);

cases("print", [
  ["a print of another model", (r) => void (r.prints[0]!.modelSha256 = otherSha256), "open", "no print of this revision's model proves spigot bore", "designer", "record-print"],
  ["a print of a file whose bytes are not verified", (r) => void (stl(r).hashVerified = false), "open", "no print of this revision's model proves spigot bore", "designer", "record-print"],
  ["a spoiled print", (r) => void (r.prints[0]!.spoiled = "warped"), "open", "no print of this revision's model proves spigot bore", "designer", "record-print"],
  ["a partial print that proves what is not carried over", (r) => { r.prints[0]!.whole = false; r.prints[0]!.proves = ["characteristic-spigot"]; }, "met"],
  ["a partial print that proves something else", (r) => { r.prints[0]!.whole = false; r.prints[0]!.proves = ["characteristic-screws"]; }, "open", "no print of this revision's model proves spigot bore", "designer", "record-print"],
  ["two partial prints that together prove all", (r) => { r.carryOvers = []; r.prints = [{ ...r.prints[0]!, whole: false, proves: ["characteristic-spigot"] }, { ...r.prints[0]!, id: "print-2", name: "4.2", whole: false, proves: ["characteristic-screws"] }]; }, "met"],
  ["all carried over: no reprint", (r) => { r.prints = []; r.characteristics[0]!.required = false; }, "met"],
  ["a print straight from the STEP", (r) => void (r.prints[0]!.modelSha256 = step(r).sha256), "met"],
  ["nothing a print could prove", (r) => r.characteristics.forEach((one) => (one.provableOnPrint = false)), "open", "no required characteristic is named that a print could prove", "designer", "add-characteristic"],
  ["no required characteristic", (r) => r.characteristics.forEach((one) => (one.required = false)), "open", "no required characteristic is named that a print could prove", "designer", "add-characteristic"],
]);

const readings = (...values: number[]) => (r: GateRecords) => void (r.results[0]!.readings = values);

cases("fit", [
  ["on both limits", readings(62.15, 62.2, 62.17), "met"],
  ["a hundredth below", readings(62.16, 62.14, 62.17), "failed", "spigot bore reads 62.14 mm, print limits 62.15 to 62.20 mm, on print 4.1; no cause is named yet", "designer", "name-cause"],
  ["a hundredth above", readings(62.16, 62.21, 62.17), "failed", "spigot bore reads 62.21 mm, print limits 62.15 to 62.20 mm, on print 4.1; no cause is named yet", "designer", "name-cause"],
  ["the design is the cause", (r) => { readings(62.09, 62.09, 62.1)(r); r.results[0]!.cause = "design"; }, "failed", "spigot bore reads 62.09 mm, print limits 62.15 to 62.20 mm, on print 4.1; the design is the cause", "designer", "make-revision"],
  ["the print is the cause: a reprint, not a revision", (r) => { readings(62.09, 62.16, 62.16)(r); r.results[0]!.cause = "print"; }, "failed", "spigot bore reads 62.09 mm, print limits 62.15 to 62.20 mm, on print 4.1; the print is the cause", "designer", "record-print"],
  ["a wrong reading of the mating part", (r) => { readings(62.09, 62.16, 62.16)(r); r.results[0]!.cause = "mating-part-reading"; }, "failed", "spigot bore reads 62.09 mm, print limits 62.15 to 62.20 mm, on print 4.1; a wrong reading of the mating part is the cause", "designer", "measure-mating-part"],
  ["a place not read", readings(62.16, 62.17), "open", "spigot bore lacks 1 reading of 3", "designer", "record-fit-check"],
  ["no print limits", (r) => void (r.characteristics[0]!.printLimits = null), "open", "spigot bore has no print limits to judge by", "designer", "state-print-limits"],
  ["no photo where one is asked", (r) => void (r.results[0]!.photos = []), "open", "spigot bore needs a photo of the fit check", "designer", "add-photo"],
  ["a photo whose bytes are not verified", (r) => void (r.photos[0]!.hashVerified = false), "open", "spigot bore needs a photo of the fit check", "designer", "add-photo"],
  ["tried against another mating part", (r) => { r.matingParts.push({ id: "mating-part-2", name: "Spare ring" }); r.fitChecks[0]!.matingPart = "mating-part-2"; }, "open", "spigot bore: it was not tried against its mating part", "designer", "record-fit-check"],
  ["any mating part when none is named", (r) => { r.matingParts.push({ id: "mating-part-2", name: "Spare ring" }); r.fitChecks[0]!.matingPart = "mating-part-2"; r.characteristics[0]!.matingPart = null; }, "met"],
  ["tried on a print of another model", (r) => void (r.prints[0]!.modelSha256 = otherSha256), "open", "spigot bore: print 4.1 can't prove it for this revision's model", "designer", "record-fit-check"],
  ["a failure that a later print put right", (r) => { failedFirst(r, "2024-02-09T10:00:00Z"); }, "met"],
  ["a failure after a success", (r) => { failedFirst(r, "2024-02-11T10:00:00Z"); }, "failed", "spigot bore reads 62.05 mm, print limits 62.15 to 62.20 mm, on print 4.2; the print is the cause", "designer", "record-print"],
  ["a yes/no answered no", (r) => answerScrews(r, [false]), "failed", "all screws start: answered no, on print 4.1; no cause is named yet", "designer", "name-cause"],
  ["a yes/no answered yes", (r) => answerScrews(r, [true]), "met"],
  ["a yes/no without an answer", (r) => answerScrews(r, []), "open", "all screws start lacks 1 answer of 1", "designer", "record-fit-check"],
  ["a minimum, on it", (r) => { r.characteristics[0]!.kind = "min"; r.characteristics[0]!.printLimits = { low: 62.16, high: null }; }, "met"],
  ["a maximum, exceeded", (r) => { r.characteristics[0]!.kind = "max"; r.characteristics[0]!.printLimits = { low: null, high: 62.1 }; }, "failed", "spigot bore reads 62.18 mm, print limit 62.10 mm at most, on print 4.1; no cause is named yet", "designer", "name-cause"],
  ["a result of a characteristic nobody knows", (r) => void r.results.push({ ...r.results[0]!, id: "result-2", characteristic: "characteristic-lost" }), "open", "1 result names a characteristic that is not among the records", "designer", "add-characteristic"],
  ["carried over from the same model", (r) => { r.carryOvers[0]!.basis = "same-model"; r.carryOvers[0]!.declared = null; r.carryOvers[0]!.fromModelSha256 = step(r).sha256; }, "met"],
  ["said to be the same model, but it is not", (r) => void (r.carryOvers[0]!.basis = "same-model"), "open", "all screws start: not tried, and the evidence of revision 3 does not carry over: revision 3 has another model file", "designer", "record-fit-check"],
  ["carried over for an earlier upload", (r) => void (r.carryOvers[0]!.modelSha256 = otherSha256), "open", "all screws start: not tried, and the evidence of revision 3 does not carry over: it was worked out for another model file", "designer", "record-fit-check"],
  ["declared by nobody", (r) => void (r.carryOvers[0]!.declared = null), "open", "all screws start: not tried, and the evidence of revision 3 does not carry over: nobody has declared it unchanged", "designer", "record-fit-check"],
  ["computed, on the allowed distance", (r) => void Object.assign(r.carryOvers[0]!, { basis: "computed", distance_mm: 0.01, allowed_mm: 0.01 }), "met"],
  ["computed, beyond it", (r) => void Object.assign(r.carryOvers[0]!, { basis: "computed", distance_mm: 0.02, allowed_mm: 0.01 }), "open", "all screws start: not tried, and the evidence of revision 3 does not carry over: the faces moved by 0.02 mm (allowed 0.01 mm)", "designer", "record-fit-check"],
  ["carried over from a failure", (r) => void (r.carryOvers[0]!.answers = [false]), "open", "all screws start: not tried, and the evidence of revision 3 does not carry over: what was found then does not hold today's print limits", "designer", "record-fit-check"],
]);

function failedFirst(r: GateRecords, at: string): void {
  r.prints.push({ ...r.prints[0]!, id: "print-2", name: "4.2" });
  r.fitChecks.push({ ...r.fitChecks[0]!, id: "fit-check-2", print: "print-2", at });
  r.results.push({ ...r.results[0]!, id: "result-2", fitCheck: "fit-check-2", readings: [62.05, 62.06, 62.07], cause: "print" });
}

function answerScrews(r: GateRecords, answers: boolean[]): void {
  r.carryOvers = [];
  r.results.push({ ...r.results[0]!, id: "result-2", characteristic: "characteristic-screws", readings: [], answers, photos: [], instrument: null });
}

test("an earlier failure, a coarse and an unverified instrument stay as remarks", () => {
  const records = changed((r) => {
    failedFirst(r, "2024-02-09T10:00:00Z");
    r.results[0]!.instrument = { name: "Caliper 150", uncertainty: 0.03, trust: "unverified" };
  });
  expect(lineOf(records, "fit").remarks).toEqual([
    "spigot bore failed before, on print 4.2",
    "spigot bore: Caliper 150 is coarse for it",
    "spigot bore was read with an unverified instrument (Caliper 150)",
    expect.stringContaining("all screws start: carried over from revision 3"),
  ]);
});

const calculation = (r: GateRecords) => r.calculations[0]!;

cases("calculations", [
  ["a fail", (r) => void (calculation(r).verdict = "fail"), "failed", "M5 threads in the ring fails", "designer", "make-revision"],
  ["inputs that changed since", (r) => void (calculation(r).inputsCurrent = false), "open", "M5 threads in the ring was computed from inputs that have changed since", "designer", "recompute-calculation"],
  ["another model", (r) => void (calculation(r).modelSha256 = otherSha256), "open", "M5 threads in the ring was computed for another model file", "designer", "recompute-calculation"],
  ["no value taken from the model", (r) => void (calculation(r).modelSha256 = null), "met"],
  ["information where a limit could judge", (r) => void (calculation(r).verdict = "information"), "open", "M5 threads in the ring has no limit to judge by", "designer", "recompute-calculation"],
  ["information of a kind that never judges", (r) => void Object.assign(calculation(r), { verdict: "information", informationOnly: true }), "met"],
  ["two of a kind, one fails", (r) => void r.calculations.push({ ...calculation(r), id: "calculation-2", title: "M8 threads", verdict: "fail" }), "failed", "M8 threads fails", "designer", "make-revision"],
  ["one that is not required fails", (r) => void r.calculations.push({ ...calculation(r), id: "calculation-2", kind: "galvanic", verdict: "fail" }), "met"],
  ["one that is not required fails on bursting", (r) => void r.calculations.push({ ...calculation(r), id: "calculation-2", kind: "rotor", title: "Speed", verdict: "fail", hazard: "burst" }), "failed", "Speed fails", "designer", "make-revision"],
  ["none required", (r) => { r.part.requiredCalculations = []; r.calculations = []; }, "met"],
]);

cases("instructions", [
  ["no coating stated", (r) => void (r.instructions!.coating = null), "open", 'not stated: the coating ("none" is an answer)', "designer", "state-instructions"],
  ["several things not stated", (r) => void Object.assign(r.instructions!, { generalTolerance: null, datums: null, edgeBreak: null }), "open", 'not stated: the general tolerance, the datums and the edge break ("none" is an answer)', "designer", "state-instructions"],
  ["a hole without instruction", (r) => void (r.holeInstructions[0]!.treatment = null), "open", "6 × Ø 5.50 through has no machining instruction", "designer", "state-instructions"],
  ["a recognised hole in no row", (r) => void (r.holeInstructions[0]!.holes = [0, 1, 2, 4, 5]), "open", "1 recognised hole has no machining instruction", "designer", "state-instructions"],
  ["not confirmed", (r) => void (r.instructions!.confirmed = null), "open", "the designer has not confirmed the instructions", "designer", "confirm-instructions"],
  ["confirmed for another model", (r) => void (r.instructions!.confirmed!.modelSha256 = otherSha256), "open", "the instructions were confirmed for another model file", "designer", "confirm-instructions"],
  ["a part without holes", (r) => { step(r).measured!.holes = 0; r.holeInstructions = []; }, "met"],
]);

const machinist = (r: GateRecords) => r.machinistAnswers[0]!;
const closed = { by: "Rin Aldous", how: "the pocket is now 2 mm wider", at: "2024-02-11T09:00:00Z" };

cases("machinist", [
  ["an objection", (r) => void Object.assign(machinist(r), { stance: "object", text: "the pocket is too deep" }), "failed", "the machinist objects: the pocket is too deep", "designer", "close-objection"],
  ["an objection that was closed", (r) => void Object.assign(machinist(r), { stance: "object", closed }), "met"],
  ["an objection followed by agreement", (r) => void r.machinistAnswers.unshift({ ...machinist(r), id: "machinist-answer-0", stance: "object", at: "2024-02-10T08:00:00Z" }), "met"],
  ["agreement followed by an objection", (r) => void r.machinistAnswers.unshift({ ...machinist(r), id: "machinist-answer-2", stance: "object", text: "wait", at: "2024-02-12T08:00:00Z" }), "failed", "the machinist objects: wait", "designer", "close-objection"],
  ["an objection beside the questions", (r) => void r.machinistAnswers.push({ ...machinist(r), id: "machinist-answer-2", question: null, stance: "object", text: "no stock until May" }), "failed", "the machinist objects: no stock until May", "designer", "close-objection"],
  ["answered for another model", (r) => void (machinist(r).modelSha256 = otherSha256), "open", "answered for another model file: Can it be held for the seal face and the bore in one set-up?", "machinist", "answer-questions"],
  ["one of two answered", (r) => void r.questions.push({ id: "question-2", text: "By when?", retired: false }), "open", "not answered: By when?", "machinist", "answer-questions"],
  ["a question no longer asked", (r) => void r.questions.push({ id: "question-2", text: "By when?", retired: true }), "met"],
]);

const customer = (r: GateRecords) => r.customerAnswers[0]!;
const reconfirm = (since: GateRecords["customerAnswers"][number]["since"]) => (r: GateRecords) =>
  void r.customerAnswers.push({ ...customer(r), id: "customer-answer-2", answer: "reconfirmed", at: "2024-02-13T10:00:00Z", since });

cases("customer", [
  ["refused", (r) => void Object.assign(customer(r), { answer: "refused", reason: "the hinge is on the wrong side" }), "failed", "the customer refused: the hinge is on the wrong side", "designer", "make-revision"],
  ["approved, then refused", (r) => void r.customerAnswers.push({ ...customer(r), id: "customer-answer-2", answer: "refused", at: "2024-02-12T00:00:00Z" }), "failed", "the customer refused", "designer", "make-revision"],
  ["approved another model", (r) => void (customer(r).modelSha256 = otherSha256), "open", "the customer approved another model file and has to reconfirm after seeing what changed", "customer", "answer-customer"],
  ["approved another model, reconfirmed this one, saw what changed", (r) => { reconfirm({ answer: "customer-answer-1", changesSeen: true })(r); customer(r).modelSha256 = otherSha256; }, "met"],
  ["reconfirmed without seeing what changed", (r) => { reconfirm({ answer: "customer-answer-1", changesSeen: false })(r); }, "open", "the customer reconfirmed without seeing what changed since the approval", "customer", "answer-customer"],
  ["reconfirmed what was never approved", (r) => { reconfirm({ answer: "customer-answer-0", changesSeen: true })(r); }, "open", "the customer reconfirmed, but no approval from before is among the records", "customer", "answer-customer"],
  ["reconfirmed its own answer", (r) => { reconfirm({ answer: "customer-answer-2", changesSeen: true })(r); }, "open", "the customer reconfirmed, but no approval from before is among the records", "customer", "answer-customer"],
  ["recorded by the shop from a call", (r) => void (customer(r).recorded = { how: "call", on: "2024-02-11", by: "Rin Aldous", picture: null }), "met"],
  ["recorded from a text message, with its picture", (r) => void (customer(r).recorded = { how: "text-message", on: "2024-02-11", by: "Rin Aldous", picture: "photo-1" }), "met"],
  ["recorded from a text message without one", (r) => void (customer(r).recorded = { how: "text-message", on: "2024-02-11", by: "Rin Aldous", picture: null }), "open", "the picture of the customer's text message is missing", "designer", "ask-customer"],
  ["an open callout of the customer", (r) => void (r.callouts[0]!.open = true), "open", "a callout of the customer is open: Will the hinge clear the strap?", "designer", "close-callout"],
  ["an open callout of the shop's own", (r) => void Object.assign(r.callouts[0]!, { open: true, byCustomer: false }), "met"],
]);

cases("deposit", [
  ["a cent short", (r) => void (r.payments[0]!.amount_minor = 24999), "open", "the agreed deposit is paid only in part", "customer", "record-payment"],
  ["a cent more", (r) => void (r.payments[0]!.amount_minor = 25001), "met"],
  ["paid in two parts", (r) => { r.payments[0]!.amount_minor = 12500; r.payments.push({ ...r.payments[0]!, id: "payment-2" }); }, "met"],
  ["paid and given back", (r) => void r.payments.push({ ...r.payments[0]!, id: "payment-2", amount_minor: -25000 }), "open", "the agreed deposit is not paid yet", "customer", "record-payment"],
  ["paid in another currency", (r) => void (r.payments[0]!.currency = "USD"), "open", "the agreed deposit is not paid yet", "customer", "record-payment"],
  ["none asked, with a reason", (r) => { r.deposit!.waived = { by: "Rin Aldous", reason: "an old friend of the shop" }; r.deposit!.agreed_minor = null; r.payments = []; }, "met"],
  ["none asked, without one", (r) => { r.deposit!.agreed_minor = 0; r.payments = []; }, "open", "no deposit is agreed, and no reason is recorded why none is asked", "owner", "agree-deposit"],
]);

cases("cautions", [
  ["a new hazard since they were read", (r) => void (r.part.hazards.speed_rpm = 9000), "open", 'the caution "Rotating parts can burst" (turns at 9000 rpm) is not read yet', "owner", "read-cautions"],
  ["a hazard that must be stated", (r) => void (r.part.hazardsToState = ["fluid", "speed_rpm"]), "open", "not stated: the speed in service", "designer", "state-hazard"],
  ["read in two sittings", (r) => { const [first] = r.acknowledgements; const two = { ...first!, id: "acknowledgement-2", cautions: first!.cautions.slice(2) }; first!.cautions = first!.cautions.slice(0, 2); r.acknowledgements.push(two); }, "met"],
]);

test("a speed that was raised has to be read again", () => {
  const spinning = (speed_rpm: number) =>
    changed((r) => {
      r.part.hazards.speed_rpm = speed_rpm;
      r.acknowledgements[0]!.cautions.push({ code: "rotating", basis: "turns at 6000 rpm" });
    });
  expect(lineOf(spinning(6000), "cautions").state).toBe("met");
  expect(lineOf(spinning(9000), "cautions").state).toBe("open");
});

test("with two STEPs nobody knows which one was approved, cut for or computed", () => {
  const records = changed((r) => void r.models.push({ ...step(r), id: "model-step-2", sha256: otherSha256 }));
  const open = evaluateGate(records, now).lines.filter((one) => one.state === "open").map((one) => one.line);
  expect(open).toEqual(["model", "fit", "calculations", "instructions", "machinist", "customer"]);
});

test("a line the part does not ask for is met by nothing and says so; model and cautions are always asked for", () => {
  const records = changed((r) => {
    r.part.requiredLines = ["fit"];
    r.deposit = null;
    r.models = [];
    r.acknowledgements = [];
  });
  expect(lineOf(records, "deposit")).toEqual({ line: "deposit", required: false, state: "met", by: [], missing: [], remarks: ["this part does not ask for this line"] });
  expect(lineOf(records, "model")).toMatchObject({ required: true, state: "open" });
  expect(lineOf(records, "cautions")).toMatchObject({ required: true, state: "open" });
});

test("a revision that is set aside or was replaced is no go, whatever its lines say", () => {
  const setAside = evaluateGate(changed((r) => void (r.revision.setAside = "the customer sold the bike")), now);
  expect(setAside).toMatchObject({ verdict: "no-go", blocked: [{ what: "revision 4 is set aside: the customer sold the bike", action: "take-up-again" }] });
  expect(setAside.lines.every((line) => line.state === "met")).toBe(true);
  expect(evaluateGate(changed((r) => void (r.revision.replaced = true)), now)).toMatchObject({ verdict: "no-go", blocked: [{ action: "make-revision" }] });
});

test("no amount of money stands in a line: machinists read it", () => {
  for (const agreed of [null, 0, 31337, 25000]) {
    const line = lineOf(changed((r) => void (r.deposit!.agreed_minor = agreed)), "deposit");
    expect(JSON.stringify(line.missing.map(({ what }) => what).concat(line.remarks))).not.toMatch(/EUR|313|250/);
  }
});
