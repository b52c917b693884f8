import { describe, expect, test } from "vitest";
import { decodeText, readStepText } from "#app/kernel/step-text.ts";

const file = (data: string) => `ISO-10303-21;\nHEADER;\nFILE_NAME('a;b','',(''),(''),'','','');\nENDSEC;\nDATA;\n${data}\nENDSEC;\nEND-ISO-10303-21;\n`;
const context = (unit: string) => file(`#1=(GEOMETRIC_REPRESENTATION_CONTEXT(3)GLOBAL_UNIT_ASSIGNED_CONTEXT((#2,#3))REPRESENTATION_CONTEXT('','3D'));\n#3=(NAMED_UNIT(*)PLANE_ANGLE_UNIT()SI_UNIT($,.RADIAN.));\n${unit}`);

describe("units", () => {
  // Prefixes by ISO 10303-41; inch and foot by their definition.
  test.each([
    { unit: "#2=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MILLI.,.METRE.));", name: "mm", mm: 1 },
    { unit: "#2=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT($,.METRE.));", name: "m", mm: 1000 },
    { unit: "#2 = ( LENGTH_UNIT ( ) NAMED_UNIT ( * ) SI_UNIT ( .CENTI. , .METRE. ) ) ;", name: "cm", mm: 10 },
    { unit: "#2=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MICRO.,.METRE.));", name: "µm", mm: 0.001 },
    { unit: "#2=(CONVERSION_BASED_UNIT('INCH',#4)LENGTH_UNIT()NAMED_UNIT(#9));#4=LENGTH_MEASURE_WITH_UNIT(LENGTH_MEASURE(25.4),#5);#5=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MILLI.,.METRE.));#9=DIMENSIONAL_EXPONENTS(1.,0.,0.,0.,0.,0.,0.);", name: "in", mm: 25.4 },
    { unit: "#2=(CONVERSION_BASED_UNIT('FOOT',#4)LENGTH_UNIT()NAMED_UNIT($));#4=LENGTH_MEASURE_WITH_UNIT(LENGTH_MEASURE(3.048E-1),#5);#5=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT($,.METRE.));", name: "ft", mm: 304.8 },
    { unit: "#2=(CONVERSION_BASED_UNIT('METRE',#4)LENGTH_UNIT()NAMED_UNIT($));#4=MEASURE_WITH_UNIT(LENGTH_MEASURE(1.),#5);#5=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MILLI.,.METRE.));", name: "mm", mm: 1 },
    { unit: "#2=(CONVERSION_BASED_UNIT('ODD',#4)LENGTH_UNIT()NAMED_UNIT($));#4=LENGTH_MEASURE_WITH_UNIT(LENGTH_MEASURE(3.5),#5);#5=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MILLI.,.METRE.));", name: "3.5 mm", mm: 3.5 },
  ])("$name, by the factor", ({ unit, name, mm }) => {
    const { lengthUnits } = readStepText(context(unit));
    expect(lengthUnits).toHaveLength(1);
    expect(lengthUnits[0]!.name).toBe(name);
    expect(lengthUnits[0]!.mm).toBeCloseTo(mm, 9);
  });

  test("none, and one that refers to itself", () => {
    expect(readStepText(context("")).lengthUnits).toEqual([]);
    expect(readStepText(context("#2=(CONVERSION_BASED_UNIT('X',#4)LENGTH_UNIT()NAMED_UNIT($));#4=LENGTH_MEASURE_WITH_UNIT(LENGTH_MEASURE(2.),#2);")).lengthUnits).toEqual([]);
  });

  test("several, the most used first", () => {
    const two = file(
      "#1=(GLOBAL_UNIT_ASSIGNED_CONTEXT((#8)));#2=(GLOBAL_UNIT_ASSIGNED_CONTEXT((#9)));#3=(GLOBAL_UNIT_ASSIGNED_CONTEXT((#9)));" +
        "#8=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT(.MILLI.,.METRE.));#9=(LENGTH_UNIT()NAMED_UNIT(*)SI_UNIT($,.METRE.));",
    );
    expect(readStepText(two).lengthUnits.map(({ name }) => name)).toEqual(["m", "mm"]);
  });
});

// ISO 10303-21, clause 6.4.3: the examples' letters, written by hand.
test.each([
  ["plain", "plain"],
  ["Jo''s", "Jo's"],
  ["\\X2\\00D8\\X0\\ 6", "Ø 6"],
  ["\\X2\\03B103B2\\X0\\", "αβ"],
  ["\\X4\\0001F529\\X0\\", "\u{1f529}"],
  ["\\X\\C4", "Ä"],
  ["\\S\\D", "Ä"],
  ["a\\\\b", "a\\b"],
  ["\xd8", "Ø"],
  ["\xc3\x98", "Ø"],
])("text %j is %j", (raw, read) => expect(decodeText(raw)).toBe(read));

describe("names of products", () => {
  test("the name, else the identifier, each once", () => {
    const { products } = readStepText(file("#1=PRODUCT('P-1','flange','',(#9));#2 = PRODUCT ( 'P-2' , '' , $ , (#9) );#3=PRODUCT('P-3','flange','',(#9));#9=PRODUCT_CONTEXT('',#8,'mechanical');#8=APPLICATION_CONTEXT('');"));
    expect(products).toEqual(["flange", "P-2"]);
  });

  test("comments, semicolons and quotes in texts don't mislead", () => {
    const { products, damage } = readStepText(file("/* #7=PRODUCT('no','no'); */#1=PRODUCT(/*'x'*/'a;#99''','b /* c */ #98','',(#2));#2=PRODUCT_CONTEXT('',$,'');"));
    expect(products).toEqual(["b /* c */ #98"]);
    expect(damage).toEqual([]);
  });
});

describe("damage", () => {
  test("sound text has none", () => expect(readStepText(file("#1=POINT($);#2=LINE(#1);"))).toMatchObject({ refusal: null, damage: [] }));
  test("a reference to nothing", () => expect(readStepText(file("#1=LINE(#77);")).damage).toEqual([expect.stringContaining("first: #77")]));
  test("an open text", () => expect(readStepText(file("#1=PRODUCT('a,'b','',$);")).damage).toEqual([expect.stringContaining("not closed")]));
  test("NUL bytes", () => expect(readStepText(file("#1=POINT(\0\0);")).damage).toEqual([expect.stringContaining("NUL")]));

  test.each([
    ["a number past every double", file("#1=CARTESIAN_POINT('',(1.E400,0.,0.));"), /too large/],
    ["no end", file("#1=POINT($);").replace("END-ISO-10303-21;", ""), /cut short/],
    ["no data", file(""), /without anything/],
    ["no header", file("#1=POINT($);").replace(/HEADER;[\s\S]*?ENDSEC;/, ""), /header/],
    ["nothing", "ISO-10303-21;", /beginning/],
  ])("%s is refused", (_, text, reason) => expect(readStepText(text).refusal).toMatch(reason));

  test("the largest double there is is no reason", () => expect(readStepText(file("#1=CARTESIAN_POINT('',(1.E307,1.E-400,-1.E+003));")).refusal).toBeNull());
});
