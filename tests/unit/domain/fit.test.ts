import { describe, expect, test } from "vitest";
import { amountText, fitSentence, judgeOnPrint, placeWords, printLimitsText, roomInside, trustWords, verdictWords, type TriedCharacteristic } from "#app/domain/fit.ts";

const bore: TriedCharacteristic = { name: "Spigot bore", kind: "limits", lowerMm: 62.0, upperMm: 62.03, printLowerMm: 62.15, printUpperMm: 62.2, places: 3, critical: true };
const least: TriedCharacteristic = { ...bore, kind: "min", printLowerMm: 4, printUpperMm: null, places: 1 };
const question: TriedCharacteristic = { ...bore, kind: "yes-no", printLowerMm: null, printUpperMm: null, places: 2 };
const found = (readingsMm: number[], answers: boolean[] = []) => ({ readingsMm, answers, uncertaintyMm: null });

describe("a reading on a print", () => {
  test("is judged by the print limits and not by those of the metal, on the limit is inside", () => {
    expect(judgeOnPrint(bore, found([62.15, 62.2, 62.17])).verdict).toBe("conforms");
    expect(judgeOnPrint(bore, found([62.02])).verdict).toBe("fails");
    expect(judgeOnPrint({ ...bore, kind: "fit" }, found([62.15, 62.2, 62.17])).verdict).toBe("conforms");
  });

  test("says at once by how much", () => {
    expect(placeWords(bore, 62.09, "mm")).toEqual({ mark: "failed", words: "fails by 0.06" });
    expect(placeWords(bore, 62.17, "mm")).toEqual({ mark: "met", words: "inside by 0.02" });
    expect(placeWords(bore, 62.2, "mm")).toEqual({ mark: "met", words: "on the limit" });
    // 0.0508 mm is two thousandths of an inch: 1 in = 25.4 mm (international agreement, 1959).
    expect(placeWords(bore, 62.2 + 0.0508, "in")).toEqual({ mark: "failed", words: "fails by 0.0020" });
    expect(placeWords(least, 3.5, "mm").words).toBe("fails by 0.50");
    expect(placeWords({ ...bore, printLowerMm: null, printUpperMm: null }, 5, "mm")).toEqual({ mark: "open", words: "no print limits" });
    expect(placeWords(question, false, "mm").mark).toBe("failed");
  });

  test("an amount that is not nothing never reads as nothing", () => {
    expect(amountText(0.004, "mm")).toBe("0.004");
    expect(amountText(0.06, "mm")).toBe("0.06");
    expect(amountText(0.0004, "mm")).toBe("0.0004");
    expect(amountText(0, "mm")).toBe("0.00");
    expect(amountText(0.01, "in")).toBe("0.0004");
  });

  test("has room to the nearer limit, and to the only one", () => {
    expect(roomInside(62.16, { low: 62.15, high: 62.2 })).toBeCloseTo(0.01, 9);
    expect(roomInside(7, { low: 4, high: null })).toBe(3);
    expect(roomInside(7, null)).toBeNull();
  });
});

describe("over all places", () => {
  test("the worst decides, what is missing is counted", () => {
    const words = (readings: number[]) => verdictWords(bore, judgeOnPrint(bore, found(readings)), "mm");
    expect(words([62.16, 62.09, 62.08])).toEqual({ mark: "failed", words: "fails by 0.07 at two of three places" });
    expect(words([62.16])).toEqual({ mark: "open", words: "two places to go" });
    expect(words([62.16, 62.17])).toEqual({ mark: "open", words: "one place to go" });
    expect(words([62.16, 62.17, 62.18])).toEqual({ mark: "met", words: "inside at all three places" });
    expect(words([])).toEqual({ mark: "open", words: "not tried" });
    expect(verdictWords(question, judgeOnPrint(question, found([], [true, false])), "mm").words).toBe("answered no");
  });

  test("one sentence says how it went", () => {
    expect(fitSentence(["conforms", "fails", "conforms"])).toEqual({ mark: "failed", sentence: "One of three does not fit" });
    expect(fitSentence(["fails", "fails"])).toEqual({ mark: "failed", sentence: "Two of two do not fit" });
    expect(fitSentence(["conforms"])).toEqual({ mark: "met", sentence: "It fits" });
    expect(fitSentence(["conforms", "conforms", "conforms"])).toEqual({ mark: "met", sentence: "It fits: all three are inside" });
    expect(fitSentence(["conforms", "incomplete"]).mark).toBe("open");
    expect(fitSentence([]).mark).toBe("open");
  });
});

test("print limits are said as fine as they are stated", () => {
  expect(printLimitsText(bore, "mm")).toBe("62.15 to 62.20 mm on the print");
  expect(printLimitsText(least, "mm")).toBe("at least 4 mm on the print");
  expect(printLimitsText({ ...least, kind: "max", printLowerMm: null, printUpperMm: 25.4 }, "in")).toBe("at most 1 in on the print");
  expect(printLimitsText(question, "mm")).toBeNull();
});

test("an instrument says how far it is trusted", () => {
  const gauge = { name: "Bore gauge", uncertaintyMm: 0.01, trust: "checked" as const, calibratedUntil: null, checkedOn: "2026-11-20", checkedWith: "ring" };
  const say = (day: string) => day.slice(8);
  expect(trustWords(gauge, "mm", "2026-11-20", say)).toBe("± 0.01 mm, checked on the ring today");
  expect(trustWords(gauge, "mm", "2026-11-21", say)).toBe("± 0.01 mm, checked on the ring, 20");
  expect(trustWords({ ...gauge, trust: "calibrated", calibratedUntil: "2026-11-20" }, "mm", "2026-11-21", say)).toBe("± 0.01 mm, calibration ran out on 20");
  expect(trustWords({ ...gauge, trust: "calibrated", calibratedUntil: "2026-11-21" }, "mm", "2026-11-21", say)).toBe("± 0.01 mm, calibrated until 21");
  expect(trustWords({ ...gauge, trust: "unverified" }, "in", "2026-11-21", say)).toBe("± 0.0004 in, unverified");
});
