import { createHash } from "node:crypto";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { canonicalJson, sha256Hex } from "#app/domain/canonical.ts";

describe("RFC 8785", () => {
  test("section 3.2.2, the sample of primitive values", () => {
    // The sample input as its authors publish it with the RFC (testdata "values.json").
    const input = '{"numbers":[333333333.33333329,1E30,4.50,2e-3,0.000000000000000000000000001],"string":"\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/","literals":[null,true,false]}';
    expect(canonicalJson(JSON.parse(input))).toBe('{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}');
  });

  test("section 3.2.3, the sample of sorting by UTF-16 code units", () => {
    const input = { "\u20ac": "Euro Sign", "\r": "Carriage Return", "\ufb33": "Hebrew Letter Dalet With Dagesh", "1": "One", "\u{1f600}": "Emoji: Grinning Face", "\u0080": "Control", "\u00f6": "Latin Small Letter O With Diaeresis" };
    expect(Object.values(JSON.parse(canonicalJson(input)) as object).length).toBe(7);
    const order = [...canonicalJson(input).matchAll(/:"([^"]+)"/g)].map((match) => match[1]);
    expect(order).toEqual(["Carriage Return", "One", "Control", "Latin Small Letter O With Diaeresis", "Euro Sign", "Emoji: Grinning Face", "Hebrew Letter Dalet With Dagesh"]);
  });

  test("section 3.2.2.3: minus zero is zero", () => {
    expect(canonicalJson([-0])).toBe("[0]");
  });
});

test("it is JSON for the same value, and does not depend on the order of keys", () => {
  fc.assert(
    fc.property(fc.jsonValue({ noUnicodeString: false }), (value) => {
      const plain: unknown = JSON.parse(JSON.stringify(value));
      const text = canonicalJson(plain);
      expect(JSON.parse(text)).toEqual(plain);
      expect(canonicalJson(reversed(plain))).toBe(text);
    }),
  );
});

function reversed(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(reversed);
  if (value === null || typeof value !== "object") return value;
  // defineProperty, so that a key called "__proto__" stays a key.
  return Object.entries(value).reverse().reduce((object, [key, item]) => Object.defineProperty(object, key, { value: reversed(item), enumerable: true, configurable: true, writable: true }), {});
}

test("what JSON can't say exactly is refused with its place", () => {
  expect(() => canonicalJson({ a: [1, NaN] })).toThrow("$.a[1] is not a finite number");
  expect(() => canonicalJson({ a: new Date(0) })).toThrow("$.a is not plain data");
  expect(() => canonicalJson([undefined])).toThrow("$[0] is not plain data");
  expect(() => canonicalJson({ a: "\ud800" })).toThrow("$.a holds half a character");
  expect(canonicalJson({ a: undefined, b: 1 })).toBe('{"b":1}');
});

test("SHA-256 agrees with the platform's, for texts and bytes of all lengths", () => {
  // FIPS 180-4, the example of "abc".
  expect(sha256Hex("abc")).toBe("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  fc.assert(
    fc.property(fc.uint8Array({ maxLength: 300 }), (bytes) => {
      expect(sha256Hex(bytes)).toBe(createHash("sha256").update(bytes).digest("hex"));
    }),
  );
  fc.assert(
    fc.property(fc.string({ unit: "grapheme" }), (text) => {
      expect(sha256Hex(text)).toBe(createHash("sha256").update(text, "utf8").digest("hex"));
    }),
  );
});
