import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { judge, type JudgedCharacteristic } from "#app/domain/verdict.ts";

const bore: JudgedCharacteristic = { kind: "limits", printLimits: { low: 62.15, high: 62.2 }, finalLimits: { low: 62.1, high: 62.13 }, places: 1, critical: true };
const ordinary = { ...bore, critical: false };

describe("simple acceptance, both sides of each limit and on it", () => {
  test.each([
    [62.149, "fails"],
    [62.15, "conforms"],
    [62.151, "conforms"],
    [62.199, "conforms"],
    [62.2, "conforms"],
    [62.201, "fails"],
  ])("a print that reads %f %s", (reading, verdict) => {
    // U does not count on a print, and neither does "critical".
    expect(judge(bore, [reading], { uncertainty: 0.02, stage: "print" })).toMatchObject({ verdict, rule: "simple acceptance" });
  });

  test("on the limit after arithmetic that is not exact in binary", () => {
    expect(62.2 - 0.05).not.toBe(62.15);
    expect(judge(ordinary, [62.2 - 0.05], { uncertainty: null, stage: "print" }).verdict).toBe("conforms");
    // Two thousandths of a micrometre beyond is beyond.
    expect(judge(ordinary, [62.15 - 2e-6], { uncertainty: null, stage: "print" }).verdict).toBe("fails");
  });

  test("an ordinary characteristic of a cut piece is judged by its final limits, without U", () => {
    expect(judge(ordinary, [62.13], { uncertainty: 0.02, stage: "final" })).toMatchObject({ verdict: "conforms", rule: "simple acceptance" });
    expect(judge(ordinary, [62.16], { uncertainty: null, stage: "final" }).verdict).toBe("fails");
  });
});

// ISO 14253-1, decision rules with the whole expanded uncertainty as guard band (secondary texts; the standard itself
// was not at hand): limits 10.00 to 10.10, U 0.02, so conforming 10.02 … 10.08, failing below 9.98 and above 10.12.
describe("ISO 14253-1 for critical characteristics of cut pieces", () => {
  const shaft: JudgedCharacteristic = { kind: "limits", printLimits: null, finalLimits: { low: 10, high: 10.1 }, places: 1, critical: true };
  test.each([
    [9.979, "fails"],
    [9.98, "undecided"],
    [10, "undecided"],
    [10.019, "undecided"],
    [10.02, "conforms"],
    [10.05, "conforms"],
    [10.08, "conforms"],
    [10.081, "undecided"],
    [10.1, "undecided"],
    [10.12, "undecided"],
    [10.121, "fails"],
  ])("%f %s", (reading, verdict) => {
    expect(judge(shaft, [reading], { uncertainty: 0.02, stage: "final" })).toMatchObject({ verdict, rule: "ISO 14253-1" });
  });

  test("one-sided limits guard the one side", () => {
    const least = { ...shaft, kind: "min" as const, finalLimits: { low: 5, high: null } };
    const at = (reading: number) => judge(least, [reading], { uncertainty: 0.1, stage: "final" }).verdict;
    expect([4.89, 4.9, 5, 5.09, 5.1, 1000].map(at)).toEqual(["fails", "undecided", "undecided", "undecided", "conforms", "conforms"]);
    const most = { ...shaft, kind: "max" as const, finalLimits: { low: null, high: 5 } };
    const above = (reading: number) => judge(most, [reading], { uncertainty: 0.1, stage: "final" }).verdict;
    expect([5.11, 5.1, 5, 4.91, 4.9, -1000].map(above)).toEqual(["fails", "undecided", "undecided", "undecided", "conforms", "conforms"]);
  });

  test("U wider than half the tolerance leaves nothing that conforms", () => {
    fc.assert(
      fc.property(fc.double({ min: 9, max: 11, noNaN: true }), (reading) => {
        expect(judge(shaft, [reading], { uncertainty: 0.051, stage: "final" }).verdict).not.toBe("conforms");
      }),
    );
  });

  test("an unknown U decides nothing", () => {
    const judged = judge(shaft, [10.05], { uncertainty: null, stage: "final" });
    expect(judged.verdict).toBe("undecided");
    expect(judged.remarks).toEqual(["the instrument's uncertainty is not known, so a critical characteristic can't be accepted"]);
  });

  test("with U zero there is no zone between", () => {
    fc.assert(
      fc.property(fc.double({ min: 9, max: 11, noNaN: true }), (reading) => {
        const critical = judge(shaft, [reading], { uncertainty: 0, stage: "final" }).verdict;
        expect(critical).toBe(judge({ ...shaft, critical: false }, [reading], { uncertainty: 0, stage: "final" }).verdict);
      }),
    );
  });

  test("a larger U never turns a reading from undecided to decided", () => {
    fc.assert(
      fc.property(fc.double({ min: 9.8, max: 10.3, noNaN: true }), fc.double({ min: 0, max: 0.1, noNaN: true }), fc.double({ min: 0, max: 0.1, noNaN: true }), (reading, u, more) => {
        const small = judge(shaft, [reading], { uncertainty: u, stage: "final" }).verdict;
        const large = judge(shaft, [reading], { uncertainty: u + more, stage: "final" }).verdict;
        expect(large === small || large === "undecided").toBe(true);
      }),
    );
  });
});

describe("how far beyond", () => {
  test.each([
    [62.09, 0.06],
    [62.15, 0],
    [62.17, 0],
    [62.25, 0.05],
  ])("%f is out by %f", (reading, by) => {
    expect(judge(bore, [reading], { uncertainty: null, stage: "print" }).outBy).toBeCloseTo(by, 9);
  });
  test("the worst place counts, each place has its own", () => {
    const judged = judge({ ...bore, places: 3 }, [62.14, 62.17, 62.23], { uncertainty: null, stage: "print" });
    expect(judged.outBy).toBeCloseTo(0.03, 9);
    expect(judged.places.map((place) => place.verdict)).toEqual(["fails", "conforms", "fails"]);
  });
});

describe("places", () => {
  const three = { ...bore, places: 3 };
  test.each<[number[], string, number]>([
    [[62.16, 62.17, 62.18], "conforms", 0],
    [[62.16, 62.17], "incomplete", 1],
    [[], "incomplete", 3],
    [[62.16, 62.09], "fails", 1],
    [[62.16, 62.17, 62.18, 62.19], "conforms", 0],
    [[62.16, 62.17, 62.18, 62.09], "fails", 0],
  ])("%j: %s, %i missing", (readings, verdict, placesMissing) => {
    expect(judge(three, readings, { uncertainty: null, stage: "print" })).toMatchObject({ verdict, placesMissing });
  });
});

describe("yes/no", () => {
  const question: JudgedCharacteristic = { kind: "yes-no", printLimits: null, finalLimits: null, places: 2, critical: true };
  test.each<[boolean[], string]>([
    [[true, true], "conforms"],
    [[true, false], "fails"],
    [[true], "incomplete"],
    [[], "incomplete"],
  ])("%j %s", (answers, verdict) => {
    for (const stage of ["print", "final"] as const) {
      expect(judge(question, answers, { uncertainty: null, stage })).toMatchObject({ verdict, rule: "simple acceptance", coarse: null });
    }
  });
});

describe("a coarse instrument: U above an eighth of the total tolerance, 4:1 between ± tolerance and ± U", () => {
  test.each([
    [0.004, false],
    [0.00625, false], // 0.05 / 8 exactly
    [0.0063, true],
    [0.03, true],
  ])("U %f on a tolerance of 0.05: %s", (uncertainty, coarse) => {
    expect(judge(bore, [62.17], { uncertainty, stage: "print" }).coarse).toBe(coarse);
  });
  test("not said without U, nor of one-sided limits", () => {
    expect(judge(bore, [62.17], { uncertainty: null, stage: "print" }).coarse).toBeNull();
    expect(judge({ ...bore, kind: "min" }, [62.17], { uncertainty: 1, stage: "print" }).coarse).toBeNull();
  });
});

test("without limits there is a remark and no verdict", () => {
  expect(judge({ ...bore, printLimits: null }, [62.17], { uncertainty: null, stage: "print" })).toMatchObject({ verdict: "incomplete", limits: null, remarks: ["no print limits are stated"] });
  expect(judge({ ...bore, finalLimits: { low: 1, high: null } }, [62.17], { uncertainty: 0.1, stage: "final" })).toMatchObject({ verdict: "incomplete", remarks: ["no final limits are stated"] });
});

test("what is no reading is refused, never judged", () => {
  const print = { uncertainty: null, stage: "print" as const };
  expect(() => judge(bore, [NaN], print)).toThrow(RangeError);
  expect(() => judge(bore, [Infinity], print)).toThrow(RangeError);
  expect(() => judge(bore, [true], print)).toThrow(RangeError);
  expect(() => judge({ ...bore, kind: "yes-no" }, [1], print)).toThrow(RangeError);
  expect(() => judge(bore, [62.17], { uncertainty: -0.1, stage: "final" })).toThrow(RangeError);
  expect(() => judge(bore, [62.17], { uncertainty: NaN, stage: "final" })).toThrow(RangeError);
});
