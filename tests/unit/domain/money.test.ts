import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { currencyDecimals, depositStanding, formatMoney, parseMoney, sumMoney } from "#app/domain/money.ts";

// Decimals by ISO 4217: most currencies 2, yen 0, Kuwaiti dinar 3.
test.each([
  ["EUR", 2],
  ["USD", 2],
  ["JPY", 0],
  ["KWD", 3],
])("%s has %i decimals", (currency, count) => {
  expect(currencyDecimals(currency)).toBe(count);
});

test.each([
  [0, "EUR", "EUR 0.00"],
  [5, "EUR", "EUR 0.05"],
  [123456, "USD", "USD 1,234.56"],
  [-2500, "USD", "USD -25.00"],
  [100000000, "EUR", "EUR 1,000,000.00"],
  [1500, "JPY", "JPY 1,500"],
  [1500, "KWD", "KWD 1.500"],
  [Number.MAX_SAFE_INTEGER, "EUR", "EUR 90,071,992,547,409.91"],
])("%i minor units of %s read %s", (amount, currency, text) => {
  expect(formatMoney(amount, currency)).toBe(text);
});

test.each([
  ["250", "EUR", 25000],
  ["250.5", "EUR", 25050],
  [" 1,250.00 ", "EUR", 125000],
  ["0.07", "EUR", 7],
  ["1.005", "EUR", null],
  ["1.005", "KWD", 1005],
  ["10.5", "JPY", null],
  ["-5", "EUR", null],
  ["1,25", "EUR", null],
  ["", "EUR", null],
  ["1e3", "EUR", null],
  ["99999999999999999", "EUR", null],
])("%j in %s is %s", (text, currency, amount) => {
  expect(parseMoney(text, currency)).toBe(amount);
});

test("what is written can be read again", () => {
  fc.assert(
    fc.property(fc.maxSafeNat(), fc.constantFrom("EUR", "USD", "JPY", "KWD"), (amount, currency) => {
      expect(parseMoney(formatMoney(amount, currency).slice(4), currency)).toBe(amount);
    }),
  );
});

describe("a deposit", () => {
  const agreed = { amount_minor: 25000, currency: "EUR" };
  test.each<[number[], object]>([
    [[], { paid_minor: 0, left_minor: 25000, settled: false }],
    [[24999], { paid_minor: 24999, left_minor: 1, settled: false }],
    [[25000], { paid_minor: 25000, left_minor: 0, settled: true }],
    [[12500, 12500], { paid_minor: 25000, left_minor: 0, settled: true }],
    [[30000], { paid_minor: 30000, left_minor: 0, settled: true }],
    [[25000, -25000], { paid_minor: 0, left_minor: 25000, settled: false }],
  ])("with payments %j", (amounts, standing) => {
    expect(depositStanding(agreed, amounts.map((amount_minor) => ({ amount_minor, currency: "EUR" })))).toEqual(standing);
  });
  test("another currency, a fraction or a sum beyond exact numbers is refused", () => {
    expect(() => depositStanding(agreed, [{ amount_minor: 1, currency: "USD" }])).toThrow(RangeError);
    expect(() => depositStanding({ ...agreed, amount_minor: -1 }, [])).toThrow(RangeError);
    expect(() => sumMoney([0.5])).toThrow(RangeError);
    expect(() => sumMoney([Number.MAX_SAFE_INTEGER, 1])).toThrow(RangeError);
    expect(() => formatMoney(0.1 + 0.2, "EUR")).toThrow(RangeError);
  });
});
