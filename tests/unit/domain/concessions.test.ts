import { describe, expect, test } from "vitest";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { gateLines, gateRecords, type GateConcession, type GateLineName, type GateRecords } from "#app/domain/gate-records.ts";
import { evaluateGate } from "#app/domain/gate.ts";

const now = new Date("2026-05-04T12:00:00Z");
const outsideApproval = { name: "T. Marsh", organisation: "Marsh Pressure Engineering", reference: "MPE-118", on: "2026-05-01" };

function conceding(lines: GateLineName[], more: Partial<GateConcession> = {}): GateConcession {
  return { id: "concession-2", lines, reason: "two pieces for the test day", by: "Rin Aldous", at: "2026-05-04T09:00:00Z", limit: { pieces: 2, until: null }, outsideApproval: null, ...more };
}

function judged(line: GateLineName, change: (records: GateRecords) => void, concession: GateConcession | null, at = now) {
  const records = structuredClone(exampleGateRecords);
  records.concessions = concession === null ? [] : [concession];
  change(records);
  const result = evaluateGate(gateRecords.parse(records), at);
  return { verdict: result.verdict, ...result.lines.find((one) => one.line === line)! };
}

const breaks: Record<GateLineName, (records: GateRecords) => void> = {
  model: (r) => void (r.models[1]!.measured!.volume_mm3 = 60000),
  print: (r) => void (r.prints = []),
  fit: (r) => void (r.results[0]!.readings = [62.09, 62.09, 62.09]),
  calculations: (r) => void (r.calculations[0]!.verdict = "fail"),
  instructions: (r) => void (r.instructions!.coating = null),
  machinist: (r) => void (r.machinistAnswers = []),
  customer: (r) => void (r.customerAnswers = []),
  deposit: (r) => void (r.payments = []),
  cautions: (r) => void (r.acknowledgements = []),
};

test.each(gateLines.filter((line) => line !== "cautions"))("%s can be conceded with a reason and a limit, and says what was conceded", (line) => {
  const lines: GateLineName[] = line === "print" ? ["print", "fit"] : [line];
  const without = judged(line, breaks[line], null);
  expect(["open", "failed"]).toContain(without.state);
  const found = judged(line, breaks[line], conceding(lines));
  expect(found).toMatchObject({ verdict: "go", state: "conceded", by: ["concession-2"], missing: without.missing });
  expect(found.remarks.at(-1)).toBe("conceded by Rin Aldous for 2 pieces: two pieces for the test day");
});

test("one concession covers several lines", () => {
  const found = judged("customer", (r) => { breaks.customer(r); breaks.deposit(r); }, conceding(["customer", "deposit"]));
  expect(found.verdict).toBe("go");
});

test("a line it does not name stays open", () => {
  expect(judged("customer", breaks.customer, conceding(["deposit"]))).toMatchObject({ verdict: "no-go", state: "open" });
});

test("unread cautions can't be conceded", () => {
  const found = judged("cautions", breaks.cautions, conceding(["cautions"], { outsideApproval }));
  expect(found).toMatchObject({ verdict: "no-go", state: "open" });
  expect(found.remarks).toContain("a concession can't cover this");
});

describe("an invalid model can't be conceded", () => {
  test.each<[string, (records: GateRecords) => void]>([
    ["no STEP", (r) => void r.models.shift()],
    ["an invalid solid", (r) => void (r.models[0]!.measured!.valid = false)],
    ["an open solid", (r) => void (r.models[0]!.measured!.closed = false)],
    ["unverified bytes", (r) => void (r.models[0]!.hashVerified = false)],
    ["unreadable", (r) => void (r.models[0]!.unreadable = "cut off")],
    ["invalid, and the STL differs too", (r) => { r.models[0]!.measured!.valid = false; breaks.model(r); }],
  ])("%s", (_, change) => {
    const found = judged("model", change, conceding(["model"], { outsideApproval }));
    expect(["open", "failed"]).toContain(found.state);
  });
});

describe("pressure and bursting need a named outside approval", () => {
  test.each<[string, (records: GateRecords) => void]>([
    ["failed, pressure", (r) => void Object.assign(r.calculations[0]!, { verdict: "fail", hazard: "pressure" })],
    ["failed, burst", (r) => void Object.assign(r.calculations[0]!, { verdict: "fail", hazard: "burst" })],
    ["failed, the part says burst", (r) => { r.calculations[0]!.verdict = "fail"; r.part.requiredCalculations[0]!.hazard = "burst"; }],
    ["left out: no easier than failing", (r) => { r.calculations = []; r.part.requiredCalculations[0]!.hazard = "pressure"; }],
    ["out of date", (r) => void Object.assign(r.calculations[0]!, { inputsCurrent: false, hazard: "pressure" })],
  ])("%s", (_, change) => {
    const without = judged("calculations", change, conceding(["calculations"]));
    expect(["open", "failed"]).toContain(without.state);
    expect(without.remarks).toContain("a concession on pressure or bursting needs a named outside approval");
    const found = judged("calculations", change, conceding(["calculations"], { outsideApproval }));
    expect(found.state).toBe("conceded");
    expect(found.remarks.at(-1)).toContain("approved outside by T. Marsh, Marsh Pressure Engineering (MPE-118, 2026-05-01)");
  });
});

test("a concession until a date holds through that day in UTC, and no longer", () => {
  const until = conceding(["deposit"], { limit: { pieces: null, until: "2026-05-04" } });
  expect(judged("deposit", breaks.deposit, until, new Date("2026-05-04T23:59:59.999Z")).state).toBe("conceded");
  const over = judged("deposit", breaks.deposit, until, new Date("2026-05-05T00:00:00Z"));
  expect(over.state).toBe("open");
  expect(over.remarks).toContain("the concession until 2026-05-04 is over");
});

test("a met line stays met by its records, concession or not", () => {
  expect(judged("deposit", () => {}, conceding(["deposit"]))).toMatchObject({ state: "met", by: ["deposit-1", "payment-1"] });
});

test("a concession without a limit, a reason or a line is no record", () => {
  for (const fault of [{ limit: { pieces: null, until: null } }, { reason: "  " }, { lines: [] }]) {
    expect(gateRecords.safeParse({ ...exampleGateRecords, concessions: [conceding(["deposit"], fault)] }).success).toBe(false);
  }
});
