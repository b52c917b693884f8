import { describe, expect, test } from "vitest";
import { readCharacteristicForm } from "#app/http/characteristic-form.server.ts";
import { amount } from "#app/http/fields.server.ts";
import { readPartForm } from "#app/http/part-form.server.ts";
import { amountText, isCurrency, parseMoney } from "#app/domain/money.ts";

function form(fields: Record<string, string>): FormData {
  const data = new FormData();
  for (const [name, value] of Object.entries(fields)) data.set(name, value);
  return data;
}

const common = { name: "Pilot bore", places: "3", units: "mm", provableOnPrint: "on", required: "on" };
const errorsOf = (fields: Record<string, string>) => {
  const read = readCharacteristicForm(form(fields));
  return read.ok ? [] : Object.keys(read.errors).sort();
};

describe("a characteristic's form", () => {
  test.each([
    ["limits", ["lowerMm", "printLowerMm", "printUpperMm", "upperMm"]],
    ["fit", ["fitClass", "nominalMm", "printLowerMm", "printUpperMm"]],
    ["min", ["lowerMm", "printLowerMm"]],
    ["max", ["printUpperMm", "upperMm"]],
    ["yes-no", ["question"]],
  ])("of kind %s asks for %j and nothing else", (kind, asked) => {
    expect(errorsOf({ ...common, kind })).toEqual(asked);
  });

  test("what a print can't show needs no print limits", () => {
    const { provableOnPrint: _, ...cutOnly } = common;
    expect(errorsOf({ ...cutOnly, kind: "limits", lowerMm: "64", upperMm: "64.03" })).toEqual([]);
  });

  test("what stands in a field of another kind is neither judged nor kept", () => {
    const read = readCharacteristicForm(form({ ...common, kind: "yes-no", question: "Drops on by hand?", lowerMm: "no length", printUpperMm: "64", fitClass: "H7" }));
    expect(read).toMatchObject({ ok: true, value: { lowerMm: null, printUpperMm: null, fitClass: null, question: "Drops on by hand?", places: 3 } });
  });

  test("lengths are read in the unit they were typed in; a unit of their own wins", () => {
    const read = readCharacteristicForm(form({ ...common, units: "in", kind: "limits", lowerMm: "2.5", upperMm: "63.6 mm", printLowerMm: "2 1/2", printUpperMm: "64 mm" }));
    expect(read).toMatchObject({ ok: true, value: { lowerMm: 63.5, upperMm: 63.6, printLowerMm: 63.5, printUpperMm: 64 } });
  });

  test("limits the wrong way round are refused, with the typed text kept", () => {
    const read = readCharacteristicForm(form({ ...common, kind: "limits", lowerMm: "64,1", upperMm: "64", printLowerMm: "63", printUpperMm: "65" }));
    expect(read).toMatchObject({ ok: false, errors: { upperMm: [expect.stringContaining("below")] }, values: { lowerMm: "64,1" } });
  });

  test("a kind that is none is asked for", () => {
    expect(errorsOf({ ...common, kind: "guess" })).toEqual(["kind"]);
  });

  test.each([["0"], ["51"], ["1.5"], ["x"]])("%s places are refused", (places) => {
    expect(errorsOf({ ...common, kind: "yes-no", question: "Turns freely?", places })).toEqual(["places"]);
  });
});

describe("a part's form", () => {
  const part = { number: "1", name: "Rotor", kit: "rotor", materialId: "", quantity: "1", speedRpm: "", pressureMPa: "", temperatureC: "", fluid: "", "calculation-fit": "burst", "calculation-thread-engagement": "no" };
  const kinds = ["thread-engagement", "fit"];

  test("model and cautions are required whatever is ticked", () => {
    expect(readPartForm(form(part), kinds)).toMatchObject({ ok: true, value: { requiredLines: ["model", "cautions"], requiredCalculations: [{ kind: "fit", hazard: "burst" }] } });
    expect(readPartForm(form({ ...part, "line-fit": "on" }), kinds)).toMatchObject({ ok: true, value: { requiredLines: ["model", "fit", "cautions"] } });
  });

  test("an empty hazard is not stated; a zero is", () => {
    expect(readPartForm(form({ ...part, speedRpm: "0" }), kinds)).toMatchObject({ ok: true, value: { speedRpm: 0, pressureMPa: null, fluid: null, lifting: false } });
  });

  test("a calculation that is not offered is not taken", () => {
    expect(readPartForm(form({ ...part, "calculation-guess": "none" }), kinds)).toMatchObject({ ok: true, value: { requiredCalculations: [{ kind: "fit", hazard: "burst" }] } });
  });

  test.each([{ speedRpm: "-1" }, { temperatureC: "-300" }, { quantity: "0" }, { quantity: "1.5" }, { fluid: "lava" }, { kit: "engine" }, { "calculation-fit": "maybe" }])("%j is refused", (wrong) => {
    expect(readPartForm(form({ ...part, ...wrong }), kinds)).toMatchObject({ ok: false, errors: { [Object.keys(wrong)[0]!]: [expect.any(String)] } });
  });
});

describe("money in a field", () => {
  const read = (text: string, currency = "EUR", signed = true) => amount(currency, "Give the amount", { signed }).safeParse(text);

  test.each([
    ["480", "EUR", 48_000],
    ["-480.50", "EUR", -48_050],
    ["−480", "EUR", -48_000],
    ["1,250.00", "USD", 125_000],
    ["1500", "JPY", 1500],
  ])("%s %s", (text, currency, minor) => {
    expect(read(text, currency)).toMatchObject({ success: true, data: minor });
  });

  test.each([["0"], ["-0.00"], ["12.345"], ["4 80"], ["free"], ["--5"], [""]])("%j is refused", (text) => {
    expect(read(text).success).toBe(false);
  });

  test("a minus is refused where money can't be given back", () => {
    expect(read("-5", "EUR", false).success).toBe(false);
  });

  test("an amount stands in its field as it can be read again", () => {
    for (const [minor, currency] of [[48_050, "EUR"], [123_456_789, "USD"], [1500, "JPY"]] as const) expect(parseMoney(amountText(minor, currency), currency)).toBe(minor);
  });

  test("currencies are known by their code", () => {
    expect([isCurrency("EUR"), isCurrency("NOK"), isCurrency("ABC"), isCurrency("eur")]).toEqual([true, true, false, false]);
  });
});
