import { factorName, lengthUnitsOf } from "./step-units.ts";

/** What the text of a STEP file (ISO 10303-21, "Part 21") says beside its shape. */
export interface StepText {
  /** Units of length its contexts name, most used first; empty when it names none. */
  lengthUnits: { mm: number; name: string }[];
  /** Names of its products (parts and assemblies), each once, in file order. */
  products: string[];
  /** Why the file can't be trusted at all, in one line; null when it can be read. */
  refusal: string | null;
  /** What is wrong with it that a reader may survive, a sentence each. */
  damage: string[];
}

/** Past the largest double: such a coordinate is infinite, and the kernel would never end. */
const OVERFLOWING = /[0-9.]E\+?0*(?:30[89]|3[1-9]\d|[4-9]\d\d|[1-9]\d{3,})/;
const ENTITY = /^#(\d+)\s*=/;
const ABOUT_LENGTH = /LENGTH_UNIT|MEASURE_WITH_UNIT|GLOBAL_UNIT_ASSIGNED_CONTEXT|\bSI_UNIT/;
const IS_PRODUCT = /^#\d+\s*=\s*PRODUCT\s*\(/;

/**
 * What do the statements of a STEP file say about units, names and damage?
 *
 * @param text the whole file, one character a byte (Latin-1)
 */
export function readStepText(text: string): StepText {
  const found = { header: false, data: false, ended: false };
  const defined = new Set<number>();
  const referred = new Set<number>();
  const aboutLength = new Map<number, string>();
  const products = new Set<string>();
  let overflow = false;

  const end = eachStatement(text, (bare, whole) => {
    const entity = ENTITY.exec(bare);
    if (!entity) {
      if (bare === "HEADER") found.header = true;
      else if (/^DATA\b/.test(bare)) found.data = true;
      else if (bare === "END-ISO-10303-21") found.ended = true;
      return;
    }
    const id = Number(entity[1]);
    defined.add(id);
    const body = bare.slice(entity[0].length);
    for (const [, other] of body.matchAll(/#(\d+)/g)) referred.add(Number(other));
    overflow ||= OVERFLOWING.test(body);
    if (ABOUT_LENGTH.test(body)) aboutLength.set(id, body);
    if (IS_PRODUCT.test(bare)) {
      const name = productName(whole);
      if (name !== "") products.add(name);
    }
  });

  const damage: string[] = [];
  const missing = [...referred].filter((id) => !defined.has(id)).sort((a, b) => a - b);
  if (missing.length > 0 && !end.openString) damage.push(`The file refers to ${missing.length === 1 ? "an entity" : `${missing.length} entities`} that it does not contain (first: #${missing[0]}); it is damaged or was cut.`);
  if (end.openString) damage.push("A text in the file is not closed by a quote; what follows it may have been misread.");
  if (text.includes("\0")) damage.push("The file holds NUL bytes; part of it was overwritten.");
  return {
    lengthUnits: lengthUnitsOf(aboutLength).map((mm) => ({ mm, name: factorName(mm) })),
    products: [...products],
    refusal: refusalOf(found, defined.size, overflow, end.openString),
    damage,
  };
}

function refusalOf(found: { header: boolean; data: boolean; ended: boolean }, entities: number, overflow: boolean, openString: boolean): string | null {
  const again = "save the part again as STEP";
  if (overflow) return `holds a number too large for any coordinate; ${again}`;
  // After an unclosed text nothing later can be told from text.
  if (openString) return null;
  if (!found.header && !found.data) return `is only the beginning of a STEP file; ${again}`;
  if (!found.header) return `is a STEP file without its header; ${again}`;
  if (!found.data || entities === 0) return `is a STEP file without anything in it; ${again}`;
  if (!found.ended) return `is a STEP file whose end is missing, so it was cut short; fetch or ${again}`;
  return null;
}

/**
 * Calls back with every statement: without comments and with its texts emptied, and whole.
 * @returns whether the file ends within a text
 */
function eachStatement(text: string, onStatement: (bare: string, whole: string) => void): { openString: boolean } {
  const marks = /['";]|\/\*/g;
  let bare = "";
  let from = 0;
  let whole = 0;
  for (let mark; (mark = marks.exec(text)); ) {
    const at = mark.index;
    bare += text.slice(from, at);
    if (mark[0] === ";") {
      onStatement(bare.trim(), text.slice(whole, at));
      bare = "";
      from = whole = at + 1;
    } else {
      const closing = mark[0] === "/*" ? "*/" : mark[0];
      const close = text.indexOf(closing, at + mark[0].length);
      if (close < 0) return { openString: closing !== "*/" };
      bare += closing === "*/" ? " " : "''";
      from = close + closing.length;
    }
    marks.lastIndex = from;
  }
  return { openString: false };
}

/** The name of a PRODUCT: its second text, or its first (the identifier) where that is blank. */
function productName(statement: string): string {
  const texts = [...statement.matchAll(/\/\*[\s\S]*?\*\/|'((?:[^']|'')*)'/g)].flatMap(([, text]) => (text === undefined ? [] : decodeText(text).trim()));
  return texts[1] || texts[0] || "";
}

/** Text of Part 21 (ISO 10303-21, clause 6.4.3): doubled quotes, \S\, \X\, \X2\ and \X4\; raw bytes count as Latin-1, or UTF-8 where they are that. */
export function decodeText(raw: string): string {
  const units = (hex: string, digits: number) => (hex.match(new RegExp(`.{${digits}}`, "g")) ?? []).map((one) => parseInt(one, 16));
  const point = (code: number) => (code <= 0x10ffff ? String.fromCodePoint(code) : "\ufffd");
  const unbroken = asUtf8(raw.replace(/[\r\n]+/g, ""));
  return unbroken
    .replace(/''/g, "'")
    .replace(/\\X2\\([0-9A-Fa-f]*)\\X0\\/g, (_, hex: string) => String.fromCharCode(...units(hex, 4)))
    .replace(/\\X4\\([0-9A-Fa-f]*)\\X0\\/g, (_, hex: string) => units(hex, 8).map(point).join(""))
    .replace(/\\X\\([0-9A-Fa-f]{2})/g, (_, hex: string) => String.fromCharCode(parseInt(hex, 16)))
    .replace(/\\S\\(.)/g, (_, letter: string) => String.fromCharCode(letter.charCodeAt(0) + 128))
    .replace(/\\P[A-I]\\/g, "")
    .replace(/\\\\/g, "\\");
}

function asUtf8(latin1: string): string {
  if (!/[\u0080-\u00ff]/.test(latin1)) return latin1;
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(Uint8Array.from(latin1, (letter) => letter.charCodeAt(0)));
  } catch {
    return latin1;
  }
}
