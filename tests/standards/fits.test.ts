import { describe, expect, test } from "vitest";
import { limitsOfClass } from "#app/engineering/limits-of-class.ts";
import { runCalculation } from "#app/engineering/registry.ts";

/** "K7 +6 -15" at a size: upper and lower deviation in micrometres, as tables print them. */
const printed = (size: number, rows: string) =>
  rows.split(",").map((row) => {
    const [name, upper, lower] = row.trim().split(" ");
    return { size, class: name!, lower: Number(lower), upper: Number(upper) };
  });

/** Deviations in micrometres of what the function gives. */
function deviations(size: number, name: string): { lower: number; upper: number } {
  const limits = limitsOfClass(size, name);
  if (!limits) throw new Error(`${size} ${name} is outside the tables`);
  const um = (mm: number) => Number(((mm - size) * 1000).toFixed(3)) + 0;
  return { lower: um(limits.lower_mm), upper: um(limits.upper_mm) };
}

// JIS B 0401 (1999), tolerances of shafts for regularly used fits: the same values as ISO 286-2.
// Read in a stored technical page (docs.steelcam.org, technical information, page 28).
const jisShafts = [
  ...printed(3, "c9 -60 -85, d8 -20 -34, d9 -20 -45, e8 -14 -28, f6 -6 -12, f8 -6 -20, g5 -2 -6, g6 -2 -8, js5 2 -2, js7 5 -5, k5 4 0, k6 6 0, m5 6 2, n6 10 4, p6 12 6, r6 16 10, s6 20 14, u6 24 18, x6 26 20"),
  ...printed(10, "c9 -80 -116, d8 -40 -62, e9 -25 -61, f7 -13 -28, g6 -5 -14, js6 4.5 -4.5, k6 10 1, m5 12 6, m6 15 6, n6 19 10, p6 24 15, r6 28 19, s6 32 23, u6 37 28, x6 43 34"),
  ...printed(14, "u6 44 33, x6 51 40"),
  ...printed(18, "c9 -95 -138, m6 18 7, p6 29 18, r6 34 23, s6 39 28, u6 44 33, x6 56 45"),
  ...printed(24, "c9 -110 -162, d9 -65 -117, k5 11 2, m6 21 8, n6 28 15, p6 35 22, r6 41 28, s6 48 35, u6 54 41, x6 67 54"),
  ...printed(30, "t6 54 41, u6 61 48, x6 77 64, f7 -20 -41, g6 -7 -20"),
  ...printed(40, "c9 -120 -182, t6 64 48, u6 76 60"),
  ...printed(50, "c9 -130 -192, k6 18 2, s6 59 43, t6 70 54, u6 86 70"),
  ...printed(65, "c9 -140 -214, f7 -30 -60, n6 39 20, p6 51 32, r6 60 41, s6 72 53, t6 85 66, u6 106 87"),
];

// JIS B 0401 (1999), tolerances of holes for regularly used fits, read in a stored excerpt
// (info.5y1.org, technical data, page 1263; it prints the figures without their signs).
const jisHoles = [
  ...printed(3, "C9 85 60, D10 60 20, E7 24 14, F6 12 6, G7 12 2, H10 40 0, K6 0 -6, K7 0 -10, M6 -2 -8, M7 -2 -12, N6 -4 -10, N7 -4 -14, P6 -6 -12, P7 -6 -16, R7 -10 -20, S7 -14 -24, U7 -18 -28, X7 -20 -30"),
  ...printed(6, "K6 2 -6, K7 3 -9, M6 -1 -9, M7 0 -12, N6 -5 -13, N7 -4 -16, P6 -9 -17, P7 -8 -20, R7 -11 -23, S7 -15 -27, U7 -19 -31, X7 -24 -36"),
  ...printed(10, "F8 35 13, K6 2 -7, K7 5 -10, M6 -3 -12, N6 -7 -16, P6 -12 -21, P7 -9 -24, R7 -13 -28, S7 -17 -32, U7 -22 -37, X7 -28 -43"),
  ...printed(24, "C10 194 110, K6 2 -11, K7 6 -15, M6 -4 -17, M7 0 -21, N6 -11 -24, N7 -7 -28, P6 -18 -31, P7 -14 -35, R7 -20 -41, S7 -27 -48, U7 -33 -54, X7 -46 -67"),
  ...printed(30, "T7 -33 -54, U7 -40 -61, X7 -56 -77"),
  ...printed(40, "C9 182 120, K6 3 -13, K7 7 -18, M6 -4 -20, N6 -12 -28, N7 -8 -33, P6 -21 -37, P7 -17 -42, R7 -25 -50, S7 -34 -59, T7 -39 -64, U7 -51 -76"),
  ...printed(50, "C9 192 130, T7 -45 -70, U7 -61 -86"),
  ...printed(65, "K6 4 -15, K7 9 -21, M6 -5 -24, N6 -14 -33, N7 -9 -39, P6 -26 -45, R7 -30 -60"),
];

// Tolerances of inside dimensions as printed in a supplier's technical reference, undated
// (online.flippingbook.com 962121, page 281): the grades and letters that the tables above leave out.
const insideDimensions = [
  ...printed(10, "J6 5 -4, J7 8 -7, J8 12 -10"),
  ...printed(30, "J6 8 -5, J7 12 -9, J8 20 -13, K8 10 -23, M8 4 -29, N8 -3 -36, JS9 26 -26"),
  ...printed(50, "J6 10 -6, J7 14 -11, J8 24 -15, K8 12 -27, M8 5 -34, N8 -3 -42"),
  ...printed(65, "R7 -30 -60"),
  ...printed(80, "J6 13 -6, J7 18 -12, J8 28 -18, K8 14 -32, M8 5 -41, N8 -4 -50, R7 -32 -62"),
  ...printed(100, "J6 16 -6, J7 22 -13, J8 34 -20, K8 16 -38, M6 -6 -28, M8 6 -48, N8 -4 -58, R7 -38 -73"),
  ...printed(120, "R7 -41 -76"),
  ...printed(140, "J6 18 -7, J7 26 -14, J8 41 -22, K8 20 -43, M8 8 -55, N8 -4 -67, R7 -48 -88"),
  ...printed(160, "R7 -50 -90"),
  ...printed(180, "R7 -53 -93"),
  ...printed(200, "J6 22 -7, J7 30 -16, J8 47 -25, K6 5 -24, K7 13 -33, K8 22 -50, M8 9 -63, N8 -5 -77, R7 -60 -106"),
  ...printed(225, "R7 -63 -109"),
  ...printed(250, "R7 -67 -113"),
];

// ISO 286-2:1988/Cor.1:2006, which puts four misprints of the standard itself right; A13 is not in our tables.
const corrigendum = [
  { size: 120, class: "E8", upper: 126, lower: 72 },
  { size: 30, class: "R10", upper: -28, lower: -112 },
  { size: 315, class: "f9", upper: -56, lower: -186 },
];

// Computed from ISO 286-1 tables 1 to 5; they are those of ISO 286-2 from memory.
const fromMemory = [
  ...printed(25, "f7 -20 -41, js6 6.5 -6.5, F8 53 20, G7 28 7"),
  ...printed(50, "H8 39 0, N9 0 -62"),
  ...printed(100, "H7 35 0, s6 93 71"),
  ...printed(200, "H11 290 0"),
  ...printed(300, "JS9 65 -65, M6 -9 -41, M7 0 -52"),
  ...printed(500, "p6 108 68"),
  // ISO 286-1 gives Δ from IT3 on.
  ...printed(25, "K3 -0.5 -4.5"),
];

// The H7 column of ISO 286-2 from 3 to 80 mm (stored copy), and the range borders: a size on a
// border belongs to the lower range.
const h7 = [
  { size: 3, upper: 10 }, { size: 3.001, upper: 12 }, { size: 6, upper: 12 }, { size: 6.001, upper: 15 }, { size: 10, upper: 15 }, { size: 10.001, upper: 18 },
  { size: 18, upper: 18 }, { size: 18.001, upper: 21 }, { size: 30, upper: 21 }, { size: 30.001, upper: 25 }, { size: 50, upper: 25 }, { size: 50.001, upper: 30 }, { size: 80, upper: 30 },
];

describe.each([
  { source: "JIS B 0401 (1999), shafts", rows: jisShafts },
  { source: "JIS B 0401 (1999), holes", rows: jisHoles },
  { source: "a printed table of inside dimensions", rows: insideDimensions },
  { source: "ISO 286-2:1988/Cor.1:2006", rows: corrigendum },
  { source: "ISO 286-2, computed and from memory", rows: fromMemory },
])("limit deviations, $source", ({ rows }) => {
  test.each(rows)("$size $class: $upper / $lower µm", ({ size, class: name, lower, upper }) => {
    expect(deviations(size, name)).toEqual({ lower, upper });
  });
});

describe("borders of the ranges and of the tables", () => {
  test.each(h7)("$size H7 is 0 to $upper µm", ({ size, upper }) => {
    expect(deviations(size, "H7")).toEqual({ lower: 0, upper });
  });

  // The finer ranges of r to x: 14 and 24 mm belong to the lower one.
  test.each([{ size: 14, x6: 40 }, { size: 14.001, x6: 45 }, { size: 24, x6: 54 }, { size: 24.001, x6: 64 }])("$size x6 begins at $x6 µm", ({ size, x6 }) => {
    expect(deviations(size, "x6").lower).toBe(x6);
  });

  // IT01 and IT0 of ISO 286-1 table 1; neither is IT1.
  test.each([{ name: "h01", lower: -0.6 }, { name: "h0", lower: -1 }, { name: "h1", lower: -1.5 }])("25 $name is 0 to $lower µm", ({ name, lower }) => {
    expect(deviations(25, name)).toEqual({ lower, upper: 0 });
  });

  test.each([
    { size: 501, name: "H7" }, { size: 0, name: "H7" }, { size: -25, name: "H7" }, { size: Number.NaN, name: "H7" },
    { size: 25, name: "H19" }, { size: 25, name: "H07" }, { size: 25, name: "Z7" }, { size: 25, name: "7H" }, { size: 25, name: "Js7" }, { size: 25, name: "H" },
    { size: 24, name: "t6" }, { size: 25, name: "j8" }, { size: 25, name: "J9" }, { size: 25, name: "K9" }, { size: 25, name: "P2" },
    { size: 1, name: "h14" }, { size: 1, name: "N9" },
  ])("$size $name is outside the tables", ({ size, name }) => {
    expect(limitsOfClass(size, name)).toBeUndefined();
  });
});

function fitOf(size: number, classes: string) {
  const [holeClass, shaftClass] = classes.split("/");
  const outcome = runCalculation("fit", { nominal_mm: size, holeClass, shaftClass });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.errors));
  const [least, largest] = outcome.result.results.clearance_mm as [number, number];
  return { least: Math.round(least * 1e6) / 1e3 + 0, largest: Math.round(largest * 1e6) / 1e3 + 0, type: outcome.result.results.fit, verdict: outcome.result.verdict };
}

describe("fits", () => {
  // Follow from the limits above by the definitions of ISO 286-1. 50 H8/f7 also as worked in an
  // encyclopedia's article on engineering fits (stored copy); 20 H7/s6 and 50 H7/s6 as worked in a
  // textbook of machine design, examples 3.2 and 3.3 (figures in FOSSEE/Scilab-TBC-Uploads, 764).
  test.each([
    { size: 25, fit: "H7/g6", least: 7, largest: 41, type: "clearance" },
    { size: 25, fit: "H7/h6", least: 0, largest: 34, type: "clearance" },
    { size: 25, fit: "H7/k6", least: -15, largest: 19, type: "transition" },
    { size: 25, fit: "H7/n6", least: -28, largest: 6, type: "transition" },
    { size: 25, fit: "H7/p6", least: -35, largest: -1, type: "interference" },
    { size: 25, fit: "H7/s6", least: -48, largest: -14, type: "interference" },
    { size: 25, fit: "H7/u6", least: -61, largest: -27, type: "interference" },
    { size: 25, fit: "K7/h6", least: -15, largest: 19, type: "transition" },
    { size: 25, fit: "P7/h6", least: -35, largest: -1, type: "interference" },
    { size: 50, fit: "H8/f7", least: 25, largest: 89, type: "clearance" },
    { size: 10, fit: "H7/g6", least: 5, largest: 29, type: "clearance" },
    { size: 20, fit: "H7/s6", least: -48, largest: -14, type: "interference" },
    { size: 50, fit: "H7/s6", least: -59, largest: -18, type: "interference" },
  ])("$size $fit is a $type fit", ({ size, fit, least, largest, type }) => {
    expect(fitOf(size, fit)).toEqual({ least, largest, type, verdict: "information" });
  });
});
