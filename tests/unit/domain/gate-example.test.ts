import fc from "fast-check";
import { expect, test } from "vitest";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { gateLines, gateRecords, listRecords, type GateLineName, type GateRecords } from "#app/domain/gate-records.ts";
import { evaluateGate, hashRecords } from "#app/domain/gate.ts";

const now = new Date("2026-05-04T12:00:00Z");
const without = (id: string): GateRecords =>
  Object.fromEntries(
    Object.entries(exampleGateRecords).map(([key, value]) => {
      if (Array.isArray(value)) return [key, value.filter((record) => record.id !== id)];
      return [key, value !== null && (value as { id: string }).id === id ? null : value];
    }),
  ) as GateRecords;
const linesIn = (records: GateRecords, state: string): string[] =>
  evaluateGate(records, now).lines.filter((line) => line.state === state).map((line) => line.line);

test("the example is a go, every line met by records of its own", () => {
  const result = evaluateGate(exampleGateRecords, now);
  expect(result.verdict).toBe("go");
  expect(result.lines.map((line) => line.line)).toEqual([...gateLines]);
  const ids = new Set(listRecords(exampleGateRecords).map(({ record }) => record.id));
  for (const line of result.lines) {
    expect(line).toMatchObject({ state: "met", missing: [] });
    expect(line.by.length).toBeGreaterThan(0);
    expect(line.by.filter((id) => !ids.has(id))).toEqual([]);
  }
});

test("the example has every kind of record, and passes its own schema unchanged", () => {
  for (const value of Object.values(exampleGateRecords)) expect(Array.isArray(value) ? value.length : value).toBeTruthy();
  expect(gateRecords.parse(JSON.parse(JSON.stringify(exampleGateRecords)))).toEqual(exampleGateRecords);
});

// Written down by hand from the nine lines of the design, not taken from what the gate says it rests on.
const needs: Record<string, GateLineName[]> = {
  "model-step": ["model", "fit", "calculations", "instructions", "machinist", "customer"], // fit: the carry-over was declared for it
  "model-stl": ["model", "print", "fit"],
  "characteristic-spigot": ["fit"],
  "characteristic-screws": ["fit"],
  "mating-part-1": ["fit"],
  "photo-1": ["fit"],
  "print-1": ["print", "fit"],
  "fit-check-1": ["fit"],
  "result-1": ["fit"],
  "carry-over-1": ["fit"],
  "calculation-1": ["calculations"],
  "instructions-1": ["instructions"],
  "hole-instruction-1": ["instructions"],
  "question-1": ["machinist"],
  "machinist-answer-1": ["machinist"],
  "customer-answer-1": ["customer"],
  "callout-1": [], // closed
  "deposit-1": ["deposit"],
  "payment-1": ["deposit"],
  "acknowledgement-1": ["cautions"],
  "concession-1": [], // over, and nothing needs it
};

test.each(Object.entries(needs))("without %s the lines %j are open, no other", (id, lines) => {
  const records = without(id);
  expect(linesIn(records, "open")).toEqual(lines);
  expect(linesIn(records, "failed")).toEqual([]);
  expect(evaluateGate(records, now).verdict).toBe(lines.length === 0 ? "go" : "no-go");
});

test("every record of the example is in that list, but part and revision, which the document can't do without", () => {
  const ids = listRecords(exampleGateRecords).map(({ record }) => record.id);
  expect(ids.filter((id) => !(id in needs))).toEqual(["part-1", "revision-4"]);
  for (const id of ["part-1", "revision-4"]) expect(gateRecords.safeParse(without(id)).success).toBe(false);
});

test("what a line says it rests on is what it needs", () => {
  const { lines } = evaluateGate(exampleGateRecords, now);
  for (const [id, needed] of Object.entries(needs)) {
    expect([id, ...lines.filter((line) => line.by.includes(id)).map((line) => line.line)]).toEqual([id, ...needed]);
  }
});

test("each thing missing says what, who and which action", () => {
  for (const id of Object.keys(needs)) {
    for (const missing of evaluateGate(without(id), now).lines.flatMap((line) => line.missing)) {
      expect(missing.what).toMatch(/\S/);
      expect(["owner", "designer", "machinist", "customer"]).toContain(missing.who);
      expect(missing.action).toMatch(/^[a-z]+(-[a-z]+)*$/);
    }
  }
});

test("taking out any set of records opens exactly the lines that still need one of them", () => {
  fc.assert(
    fc.property(fc.subarray(Object.keys(needs)), (taken) => {
      const has = (id: string) => !taken.includes(id);
      const records = taken.reduce((left, id) => intersect(left, without(id)), exampleGateRecords);
      // The lines whose records lean on each other, worked out a second time.
      const printCounts = has("print-1") && has("model-stl");
      const carried = has("carry-over-1") && has("model-step") && has("mating-part-1");
      const tried = printCounts && has("result-1") && has("fit-check-1") && has("mating-part-1") && has("photo-1");
      const spigot = has("characteristic-spigot");
      const screws = has("characteristic-screws");
      const met: Partial<Record<GateLineName, boolean>> = {
        model: has("model-step") && (has("model-stl") || !has("print-1")),
        print: (spigot || screws) && (!spigot || printCounts) && (!screws || printCounts || carried),
        fit: (spigot || screws) && (spigot ? tried : !has("result-1")) && (screws ? carried : !has("carry-over-1")),
      };
      const { lines, verdict } = evaluateGate(records, now);
      for (const { line, state } of lines) {
        const isMet = met[line] ?? !taken.some((id) => needs[id]!.includes(line));
        expect([line, state]).toEqual([line, isMet ? "met" : "open"]);
      }
      expect(verdict === "go").toBe(lines.every((line) => line.state === "met"));
    }),
    { numRuns: 500 },
  );
});

function intersect(a: GateRecords, b: GateRecords): GateRecords {
  return Object.fromEntries(
    Object.entries(a).map(([key, value]) => {
      const other = b[key as keyof GateRecords];
      return [key, Array.isArray(value) ? value.filter((record) => (other as { id: string }[]).some((one) => one.id === record.id)) : value === null ? null : other];
    }),
  ) as GateRecords;
}

test("the hash is the same in any order of records and keys, and another for any other content", () => {
  const shuffled = fc.sample(fc.infiniteStream(fc.nat()), 1)[0]!;
  const backwards = Object.fromEntries(
    Object.entries(exampleGateRecords)
      .reverse()
      .map(([key, value]) => [key, Array.isArray(value) ? [...value].sort(() => ((shuffled.next().value as number) % 2) - 0.5) : value]),
  ) as GateRecords;
  expect(hashRecords(backwards)).toBe(hashRecords(exampleGateRecords));
  const hashes = new Set(Object.keys(needs).map((id) => hashRecords(without(id))));
  expect(hashes.size).toBe(Object.keys(needs).length);
  expect(hashes.has(hashRecords(exampleGateRecords))).toBe(false);
  expect(hashRecords(exampleGateRecords)).toMatch(/^[0-9a-f]{64}$/);
});

test("the clock is no part of the hash", () => {
  expect(evaluateGate(exampleGateRecords, new Date("2031-01-01T00:00:00Z")).recordsHash).toBe(evaluateGate(exampleGateRecords, now).recordsHash);
});
