import { createElement as h, Fragment } from "react";
import fc from "fast-check";
import { expect, test } from "vitest";
import { dayText } from "#app/components/day.tsx";
import { placeOnScale, scaleText } from "#app/components/limits-scale-layout.ts";
import { groupDigits, numberText } from "#app/components/measure-text.ts";
import { Area, Length, Mass, Num, Volume } from "#app/components/measure.tsx";
import { serverMarkup, wordsOf } from "./render.ts";

test("one switch turns every length, area, volume and mass of the page", async () => {
  const page = h(Fragment, null, h(Length, { mm: 25.4, digits: 2 }), h(Area, { mm2: 64516 }), h(Volume, { mm3: 16387.064 }), h(Mass, { kg: 0.45359237 }));
  expect(wordsOf(await serverMarkup(page))).toBe("25.40 mm 645.16 cm² 16.39 cm³ 453.6 g");
  // 1 in³ = 16.387064 cm³, 1 lb = 0.45359237 kg, both exact: NIST SP 811, appendix B.8 (from memory).
  expect(wordsOf(await serverMarkup(page, { units: "in" }))).toBe("1.0000 in 100.000 in² 1.000 in³ 1.000 lb");
});

test("what is shown rounded keeps its stored value in the markup", async () => {
  const markup = await serverMarkup(h(Length, { mm: "62.0912345", digits: 2 }));
  expect(markup).toContain('value="62.0912345"');
  expect(wordsOf(markup)).toBe("62.09 mm");
});

test("decimals that are missing keep their room and are not written", async () => {
  const markup = await serverMarkup(h(Num, { value: 62.1, align: 3 }));
  expect(markup).toContain('data-pad="00"');
  expect(wordsOf(markup)).toBe("62.1");
  expect(await serverMarkup(h(Num, { value: 62, align: 2 }))).toContain('data-pad=".00"');
});

test.each([
  [0.1 + 0.2, undefined, false, "0.3"],
  [-0.0001, 2, false, "0.00"],
  [-1.5, 2, false, "−1.50"],
  [9.1, 1, true, "+9.1"],
  [0, 1, true, "0.0"],
  [NaN, 2, false, "–"],
])("%s with %s decimals reads %s %s", (value, digits, signed, text) => {
  expect(numberText(value, digits, signed)).toBe(text);
});

test("figures are grouped by a thin space from five on, decimals never", () => {
  expect(groupDigits("1234")).toBe("1234");
  expect(groupDigits("12345.67891")).toBe("12\u202f345.67891");
  expect(groupDigits("−1234567")).toBe("−1\u202f234\u202f567");
});

test("a day is the one of UTC, spelled as ECMAScript's own toUTCString spells it", () => {
  // ECMA-262, Date.prototype.toUTCString: "Thu, 12 Nov 2026 10:14:00 GMT".
  fc.assert(
    fc.property(fc.integer({ min: Date.UTC(1990, 0, 1), max: Date.UTC(2090, 0, 1) }), (at) => {
      const [weekday, day, month, year, time] = new Date(at).toUTCString().replace(",", "").split(" ");
      expect(dayText({ at, time: true, weekday: true })).toBe(`${weekday} ${Number(day)} ${month} ${year}, ${time!.slice(0, 5)} UTC`);
    }),
  );
  expect(dayText({ at: "2026-03-01" })).toBe("1 Mar 2026");
  expect(() => dayText({ at: "soon" })).toThrow(RangeError);
});

const limit = fc.double({ min: -500, max: 500, noNaN: true });

test("the scale keeps proportions: limits, undecided bands and readings on one ruler", () => {
  fc.assert(
    fc.property(limit, fc.double({ min: 0.01, max: 50, noNaN: true }), fc.double({ min: -0.9, max: 1.9, noNaN: true }), (lower, span, share) => {
      const upper = lower + span;
      const placed = placeOnScale({ lower, upper, readings: [lower + span * share], uncertainty: span / 8 });
      const [from, to] = [placed.limits[0]!.at, placed.limits[1]!.at];
      expect(placed.readings[0]!.off).toBe(0);
      expect((placed.readings[0]!.at - from) / (to - from)).toBeCloseTo(share, 5);
      expect(placed.undecided / (to - from)).toBeCloseTo(1 / 8, 5);
      expect(placed.band).toEqual({ from, to });
    }),
  );
});

test("a reading far out stands at the edge of its side and says so", () => {
  const scale = (reading: number) => placeOnScale({ lower: 62.15, upper: 62.2, readings: [reading], uncertainty: null }).readings[0]!;
  expect(scale(70).off).toBe(1);
  expect(scale(50).off).toBe(-1);
  expect(scale(62.15).off).toBe(0);
});

test("one limit alone, equal limits and none are drawn too; nonsense is refused", () => {
  for (const [lower, upper] of [[3, null], [null, 3], [5, 5], [null, null], [0, null]] as const) {
    const placed = placeOnScale({ lower, upper, readings: [4], uncertainty: 0.1 });
    for (const { at } of [...placed.limits, ...placed.readings]) expect(at).toSatisfy((x: number) => x >= 0 && x <= placed.width);
  }
  expect(() => placeOnScale({ lower: 2, upper: 1, readings: [], uncertainty: null })).toThrow(RangeError);
  expect(() => placeOnScale({ lower: NaN, upper: 1, readings: [], uncertainty: null })).toThrow(RangeError);
  expect(scaleText({ lower: 1, upper: null, readings: [], uncertainty: null }, (value) => `${value} mm`)).toBe("At least 1 mm. Not read yet");
});
