import { expect, test } from "vitest";
import { describeChanges } from "#app/domain/changes.ts";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { gateRecords, listRecords, type GateRecords } from "#app/domain/gate-records.ts";
import { hashRecords } from "#app/domain/gate.ts";

function after(change: (records: GateRecords) => void): string[] {
  const records = structuredClone(exampleGateRecords);
  change(records);
  return describeChanges(exampleGateRecords, gateRecords.parse(records)).map(({ what }) => what);
}

test("nothing changed, nothing said, whatever the order", () => {
  expect(after(() => {})).toEqual([]);
  expect(after((r) => { r.characteristics.reverse(); r.models.reverse(); })).toEqual([]);
});

test.each<[string[], (records: GateRecords) => void]>([
  [["an upload replaced the STEP filler-flange-4.step by flange-new.step"], (r) => void (r.models[0] = { ...r.models[0]!, id: "model-step-2", name: "flange-new.step", sha256: "cd".repeat(32) })],
  [["an upload replaced the STEP filler-flange-4.step"], (r) => void (r.models[0] = { ...r.models[0]!, id: "model-step-2", sha256: "cd".repeat(32) })],
  [["the STL other.stl was added"], (r) => void r.models.push({ ...r.models[1]!, id: "model-stl-2", name: "other.stl", sha256: "cd".repeat(32) })],
  [["a fit check of print 4.1 was added", "a result of all screws start was added"], (r) => { r.fitChecks.push({ ...r.fitChecks[0]!, id: "fit-check-2" }); r.results.push({ ...r.results[0]!, id: "result-2", fitCheck: "fit-check-2", characteristic: "characteristic-screws" }); }],
  [["a result of spigot bore changed: readings"], (r) => void (r.results[0]!.readings = [62.09])],
  [["the characteristic spigot bore changed: print limits, critical"], (r) => void Object.assign(r.characteristics[0]!, { printLimits: { low: 62, high: 63 }, critical: false })],
  [["print 4.1 no longer counts: warped"], (r) => void (r.prints[0]!.spoiled = "warped")],
  [['the callout "Will the hinge clear the strap?" was opened again'], (r) => void (r.callouts[0]!.open = true)],
  [["a payment was taken away"], (r) => void (r.payments = [])],
  [["a refund was added"], (r) => void r.payments.push({ ...r.payments[0]!, id: "payment-2", amount_minor: -1 })],
  [["the deposit was taken away"], (r) => void (r.deposit = null)],
  [["the deposit changed: agreed"], (r) => void (r.deposit!.agreed_minor = 1)],
  [["an objection of the machinist was added"], (r) => void r.machinistAnswers.push({ ...r.machinistAnswers[0]!, id: "machinist-answer-2", stance: "object" })],
  [["the customer's answer (refused) was added"], (r) => void r.customerAnswers.push({ ...r.customerAnswers[0]!, id: "customer-answer-2", answer: "refused" })],
  [["the revision was set aside: sold"], (r) => void (r.revision.setAside = "sold")],
  [["the part changed: hazards"], (r) => void (r.part.hazards.speed_rpm = 9000)],
  [["the instructions changed: coating"], (r) => void (r.instructions!.coating = "hard anodised")],
  [["the calculation M5 threads in the ring changed: verdict"], (r) => void (r.calculations[0]!.verdict = "fail")],
])("%j", (what, change) => {
  expect(after(change)).toEqual(what);
});

test("whenever the hash differs there is something to say, for every record taken away or put in", () => {
  for (const { key, record } of listRecords(exampleGateRecords)) {
    if (key === "part" || key === "revision") continue;
    const fewer = structuredClone(exampleGateRecords);
    const list = fewer[key];
    if (Array.isArray(list)) Object.assign(fewer, { [key]: list.filter((one) => one.id !== record.id) });
    else Object.assign(fewer, { [key]: null });
    expect(hashRecords(fewer)).not.toBe(hashRecords(exampleGateRecords));
    expect(describeChanges(exampleGateRecords, fewer)).toEqual([{ what: expect.stringMatching(/ was taken away$/), key, id: record.id }]);
    expect(describeChanges(fewer, exampleGateRecords)).toEqual([{ what: expect.stringMatching(/ was added$/), key, id: record.id }]);
  }
});
