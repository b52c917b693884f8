import fc from "fast-check";
import { expect, test } from "vitest";
import { pressKey, type KeypadKey } from "#app/components/keypad-entry.ts";
import { moveSpot } from "#app/components/spot.ts";

const keys: KeypadKey[] = ["0", "1", "2", "3", "4", "5", "6", "7", "8", "9", ".", "delete"];
const typed = (text: string) => [...text].reduce((entry, key) => pressKey(entry, key as KeypadKey), "");

test("keys write the reading as it is read", () => {
  expect(typed("62.09")).toBe("62.09");
  expect(typed(".5")).toBe("0.5");
  expect(typed("007")).toBe("7");
  expect(typed("1.2.3")).toBe("1.23");
  expect(pressKey("0.", "delete")).toBe("");
  expect(pressKey("", "delete")).toBe("");
});

test("whatever is pressed, what stands there is a number, or nothing", () => {
  fc.assert(
    fc.property(fc.array(fc.constantFrom(...keys), { maxLength: 40 }), (pressed) => {
      const entry = pressed.reduce(pressKey, "");
      expect(entry.length).toBeLessThanOrEqual(10);
      if (entry !== "") expect(entry).toMatch(/^(0|[1-9]\d*)(\.\d*)?$/);
    }),
  );
});

test("a spot stays on its picture and to the thousandth", () => {
  fc.assert(
    fc.property(fc.double({ min: -3, max: 3, noNaN: true }), fc.double({ min: -3, max: 3, noNaN: true }), (dx, dy) => {
      const { x, y } = moveSpot({ x: 0.5, y: 0.5 }, dx, dy);
      for (const value of [x, y]) {
        expect(value).toBeGreaterThanOrEqual(0);
        expect(value).toBeLessThanOrEqual(1);
        expect(Math.abs(value * 1000 - Math.round(value * 1000))).toBeLessThan(1e-9);
      }
    }),
  );
});
