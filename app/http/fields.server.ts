import { z } from "zod";
import { currencyDecimals, parseMoney } from "#app/domain/money.ts";
import { parseLength } from "#app/units.ts";
import type { LengthUnit } from "./form.server.ts";

// The kinds of field that forms are made of. Each reads the text that was typed, refuses a
// blank before it can turn into a zero, and says what to do in words.

export const words = (say: string, longest = 200) => z.string({ error: say }).trim().min(1, say).max(longest, `Keep it within ${longest} characters`);

export const wordsOrNone = (longest = 4000) => z.string().trim().max(longest, `Keep it within ${longest} characters`).default("");

export const wordsOrNull = (longest = 200) => wordsOrNone(longest).transform((text) => text || null);

export const email = z.string({ error: "Give an e-mail address" }).trim().min(1, "Give an e-mail address").pipe(z.email("This does not look like an e-mail address"));

export const emailOrNull = z.string().trim().default("").transform((text) => text || null).pipe(z.email("This does not look like an e-mail address").nullable());

export const chosen = (say: string) => z.string({ error: say }).min(1, say).pipe(z.uuid(say));

export const chosenOrNull = z.string().default("").transform((text) => text || null).pipe(z.uuid("Pick one of the list").nullable());

export const day = (say: string) => z.string({ error: say }).min(1, say).pipe(z.iso.date("Give a day as year-month-day"));

export const dayOrNull = z.string().default("").transform((text) => text || null).pipe(z.iso.date("Give a day as year-month-day").nullable());

export const ticked = z.string().optional().transform((value) => value !== undefined && value !== "");

export const rowVersion = z.string().regex(/^\d+$/, "Load the page again").transform(Number);

/** "1,5" and "1.5" are one number; anything with a second mark is refused and not guessed. */
function readNumber(text: string): number | null {
  const plain = text.trim().replace(",", ".");
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain) ? Number(plain) : null;
}

interface Range {
  /** The value itself is refused too. */
  above?: number;
  min?: number;
  max?: number;
  whole?: boolean;
}

function inRange(value: number, { above, min, max, whole }: Range): string | null {
  if (whole && !Number.isInteger(value)) return "Give a whole number";
  if (above !== undefined && value <= above) return `Give more than ${above}`;
  if (min !== undefined && value < min) return `Give at least ${min}`;
  if (max !== undefined && value > max) return `Give at most ${max}`;
  return null;
}

export const number = (say: string, range: Range = {}) =>
  z.string({ error: say }).trim().min(1, say).transform((text, context) => {
    const value = readNumber(text);
    const fault = value === null ? "This is not a number" : inRange(value, range);
    if (value === null || fault) {
      context.addIssue({ code: "custom", message: fault ?? say });
      return z.NEVER;
    }
    return value;
  });

export const numberOrNull = (range: Range = {}) =>
  z.string().trim().default("").transform((text, context) => {
    if (text === "") return null;
    const value = readNumber(text);
    const fault = value === null ? "This is not a number" : inRange(value, range);
    if (value === null || fault) {
      context.addIssue({ code: "custom", message: fault ?? "This is not a number" });
      return z.NEVER;
    }
    return value;
  });

/** A length, in mm whatever was typed: "12.7", "1/2 in", "0,5\"". */
export const length = (units: LengthUnit, say: string, range: Range = {}) =>
  z.string({ error: say }).trim().min(1, say).transform((text, context) => readLength(text, units, range, context));

export const lengthOrNull = (units: LengthUnit, range: Range = {}) =>
  z.string().trim().default("").transform((text, context) => (text === "" ? null : readLength(text, units, range, context)));

function readLength(text: string, units: LengthUnit, range: Range, context: z.core.$RefinementCtx): number {
  const parsed = parseLength(text, units);
  const fault = parsed.ok ? inRange(parsed.mm, range) : parsed.reason;
  if (!parsed.ok || fault) {
    context.addIssue({ code: "custom", message: fault ?? "This is not a length" });
    return z.NEVER;
  }
  return parsed.mm;
}

/** Money as typed, "480" or "480.50", in minor units of the currency; `signed` takes "-480" too. Never zero. */
export const amount = (currency: string, say: string, { signed = false }: { signed?: boolean } = {}) =>
  z.string({ error: say }).trim().min(1, say).transform((text, context) => {
    const below = signed && /^[-−]/.test(text);
    const minor = parseMoney(below ? text.slice(1) : text, currency);
    if (!minor) {
      context.addIssue({ code: "custom", message: minor === 0 ? "Give an amount that is not zero" : `Give an amount such as 480${currencyDecimals(currency) > 0 ? " or 480.50" : ""}` });
      return z.NEVER;
    }
    return below ? -minor : minor;
  });
