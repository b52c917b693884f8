import { describe, expect, test } from "vitest";
import { playwrightCount, readArguments, SUITES, vitestCount } from "#scripts/launcher/suites.mjs";

describe("what `npm test` runs", () => {
  test.each([
    [[], { suites: SUITES, filters: [], passedOn: [] }],
    [["pure"], { suites: ["pure"], filters: [], passedOn: [] }],
    [["lint", "typecheck"], { suites: ["typecheck", "lint"], filters: [], passedOn: [] }],
    [["tests/unit/domain/gate"], { suites: ["pure"], filters: ["tests/unit/domain/gate"], passedOn: [] }],
    [["tests/faults"], { suites: ["integration"], filters: ["tests/faults"], passedOn: [] }],
    [["tests/browser/fit-check.spec.ts"], { suites: ["browser"], filters: ["tests/browser/fit-check.spec.ts"], passedOn: [] }],
    [["pure", "gate", "-t", "the deposit"], { suites: ["pure"], filters: ["gate"], passedOn: ["-t", "the deposit"] }],
    [["gate"], { suites: ["pure", "integration"], filters: ["gate"], passedOn: [] }],
  ])("%j", (args, expected) => {
    expect(readArguments(args)).toEqual(expected);
  });
});

describe("vitest's report is counted", () => {
  const passing = { status: "passed", assertionResults: [{ status: "passed" }] };
  const report = { numPassedTests: 7, numFailedTests: 0, numPendingTests: 0, numTodoTests: 0, testResults: [passing] };

  test("all passed", () => expect(vitestCount(report, 0)).toEqual({ passed: 7, failed: 0, skipped: 0 }));
  test("some failed", () => {
    expect(vitestCount({ ...report, numFailedTests: 2, testResults: [{ status: "failed", assertionResults: [{ status: "failed" }] }] }, 1)).toEqual({ passed: 7, failed: 2, skipped: 0 });
  });
  test("a file that can't be loaded is a failure, though no test in it is named", () => {
    expect(vitestCount({ ...report, testResults: [passing, { status: "failed", assertionResults: [] }] }, 1).failed).toBe(1);
  });
  test("an error outside of all tests is a failure", () => expect(vitestCount(report, 1).failed).toBe(1));
  test("a runner that died before it reported is a failure", () => expect(vitestCount(undefined, null)).toEqual({ passed: 0, failed: 1, skipped: 0 }));
  test("skipped ones are told apart", () => expect(vitestCount({ ...report, numPendingTests: 2, numTodoTests: 1 }, 0).skipped).toBe(3));
});

describe("Playwright's report is counted", () => {
  const report = { stats: { expected: 4, unexpected: 0, flaky: 0, skipped: 0 }, errors: [] };

  test("all passed", () => expect(playwrightCount(report, 0)).toEqual({ passed: 4, failed: 0, skipped: 0 }));
  test("failed ones and those that needed a second try", () => {
    expect(playwrightCount({ ...report, stats: { ...report.stats, unexpected: 1, flaky: 1 } }, 1).failed).toBe(2);
  });
  test("a server that did not start is a failure", () => expect(playwrightCount({ ...report, errors: [{ message: "no server" }] }, 1).failed).toBe(1));
  test("a runner that died before it reported is a failure", () => expect(playwrightCount(undefined, 1).failed).toBe(1));
});
