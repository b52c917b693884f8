import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { entriesOf, readEntries } from "#app/engineering/entries.ts";
import { lengthText, parseLength, parseQuantity } from "#app/units.ts";

describe("typed lengths", () => {
  test.each([
    { text: "12.7", unit: "mm", mm: 12.7 },
    { text: "12,7", unit: "mm", mm: 12.7 },
    { text: "7/8", unit: "in", mm: 22.225 },
    { text: "1 1/4 in", unit: "mm", mm: 31.75 },
    { text: "1-1/4\"", unit: "mm", mm: 31.75 },
    { text: ".5\"", unit: "mm", mm: 12.7 },
    { text: "10 mm", unit: "in", mm: 10 },
    { text: "-3", unit: "mm", mm: -3 },
  ] as const)("$text typed where lengths are in $unit", ({ text, unit, mm }) => {
    const parsed = parseLength(text, unit);
    expect(parsed.ok && parsed.mm).toBeCloseTo(mm, 9);
  });

  test.each(["", "abc", "1/0", "1..2", "5 miles", "1,2,3", "12.7.1 mm", "Infinity"])("refuses %j", (text) => {
    expect(parseLength(text, "mm").ok).toBe(false);
  });

  test("a unit change and back changes nothing", () => {
    fc.assert(fc.property(fc.double({ min: 0.001, max: 5000, noNaN: true }), (mm) => {
      const inches = parseLength(String(Number((mm / 25.4).toFixed(12))), "in");
      expect(inches.ok && Math.abs(inches.mm - mm)).toBeLessThan(1e-9);
    }));
  });
});

describe("typed quantities", () => {
  // Factors of NIST SP 811, appendix B (from memory): 1 psi = 6.894757 kPa, 1 lbf = 4.448222 N,
  // 1 lbf·ft = 1.355818 N·m, 1 lb = 0.45359237 kg, 1 in = 25.4 mm.
  test.each([
    { text: "1000 psi", unit: "MPa", value: 6.894757 },
    { text: "45 ksi", unit: "MPa", value: 310.264 },
    { text: "10 bar", unit: "MPa", value: 1 },
    { text: "800 N/mm²", unit: "MPa", value: 800 },
    { text: "100 lbf", unit: "N", value: 444.8222 },
    { text: "1.5 kN", unit: "N", value: 1500 },
    { text: "10 lb-ft", unit: "Nm", value: 13.55818 },
    { text: "12 in·lb", unit: "Nm", value: 1.355818 },
    { text: "10 N·m", unit: "Nm", value: 10 },
    { text: "2 lb", unit: "kg", value: 0.90718474 },
    { text: "212 °F", unit: "°C", value: 100 },
    { text: "-40 F", unit: "°C", value: -40 },
    { text: "293.15 K", unit: "°C", value: 20 },
    { text: "3/8 in", unit: "mm", value: 9.525 },
    { text: "0,5", unit: "", value: 0.5 },
    { text: "−5", unit: "°C", value: -5 },
  ])("$text is $value $unit", ({ text, unit, value }) => {
    const parsed = parseQuantity(text, unit);
    expect(parsed.ok && Math.abs(parsed.value - value)).toBeLessThan(Math.max(1e-9, Math.abs(value) * 1e-6));
  });

  test.each([{ text: "5 in", unit: "MPa" }, { text: "5 psi", unit: "mm" }, { text: "5 miles", unit: "mm" }, { text: "", unit: "N" }, { text: "1/0", unit: "mm" }, { text: "lots", unit: "N" }, { text: "5 N", unit: "" }])("refuses $text where $unit is wanted", ({ text, unit }) => {
    expect(parseQuantity(text, unit)).toMatchObject({ ok: false, reason: expect.any(String) });
  });

  test("lengths for a sentence keep no zeros and lose no thousandth", () => {
    expect([lengthText(12.7), lengthText(12.7, "in"), lengthText(0.0184), lengthText(25.021)]).toEqual(["12.7 mm", "0.5 in", "0.0184 mm", "25.021 mm"]);
  });
});

describe("entries of a form", () => {
  test("are read in their unit, blanks left out, a unit behind a pair counting twice", () => {
    expect(readEntries("fit", { nominal_mm: "1 in", holeClass: " H7 ", shaftClass: "", shaftLimits_mm: "1/2 to 1 in", clearance_mm: "0,01 .. 0,05", temperature_C: "212 °F" })).toEqual({
      nominal_mm: 25.4, holeClass: "H7", shaftLimits_mm: [12.7, 25.4], clearance_mm: [0.01, 0.05], temperature_C: 100,
    });
    expect(readEntries("thread-engagement", { boltTensile_MPa: "lots" })).toEqual({ boltTensile_MPa: "lots" });
  });

  test("show label, unit, default and where it is from", () => {
    expect(entriesOf("thread-engagement").find(({ key }) => key === "safety")).toMatchObject({ default: "2", optional: true, hint: "Unless stated: 2, common practice, no source" });
    expect(entriesOf("fit").find(({ key }) => key === "clearance_mm")).toMatchObject({ kind: "pair", unit: "mm", optional: true });
  });
});
