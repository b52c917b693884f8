import { expect, test } from "vitest";
import { nextReleaseLetter } from "#app/domain/revision-letters.ts";

function letters(count: number): string[] {
  const list: string[] = [];
  for (let last: string | null = null; list.length < count; list.push(last)) last = nextReleaseLetter(last);
  return list;
}

// ASME Y14.35: I, O, Q, S, X and Z are not used; after Y come AA, AB and so on (from memory, the standard was not at hand).
test("the first letters run from A to Y and leave out what is misread", () => {
  expect(letters(20)).toEqual(["A", "B", "C", "D", "E", "F", "G", "H", "J", "K", "L", "M", "N", "P", "R", "T", "U", "V", "W", "Y"]);
});

test.each([
  ["H", "J"],
  ["N", "P"],
  ["P", "R"],
  ["R", "T"],
  ["W", "Y"],
  ["Y", "AA"],
  ["AA", "AB"],
  ["AH", "AJ"],
  ["AY", "BA"],
  ["WY", "YA"],
  ["YY", "AAA"],
])("after %s comes %s", (previous, next) => {
  expect(nextReleaseLetter(previous)).toBe(next);
});

test("no letter ever comes twice, and none that is left out", () => {
  const list = letters(1000);
  expect(new Set(list).size).toBe(1000);
  expect(list.filter((letter) => /[^A-Z]|[IOQSXZ]/.test(letter))).toEqual([]);
  expect(list[19 + 400]).toBe("YY"); // 20 of one letter, 400 of two
});

test.each(["", "I", "AO", "a", "-", "A B"])("%j is refused: it is no release letter", (previous) => {
  expect(() => nextReleaseLetter(previous)).toThrow(RangeError);
});
