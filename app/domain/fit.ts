import { alignedDecimals } from "#app/domain/numbers-in-words.ts";
import { judge, type JudgedCharacteristic, type Judgement, type Limits } from "#app/domain/verdict.ts";
import { fromMm, type LengthUnit } from "#app/units.ts";

/** As much of a characteristic as a fit check needs; lengths in mm. */
export interface TriedCharacteristic {
  name: string;
  kind: "limits" | "fit" | "min" | "max" | "yes-no";
  lowerMm: number | null;
  upperMm: number | null;
  printLowerMm: number | null;
  printUpperMm: number | null;
  places: number;
  critical: boolean;
}

const limitsOf = (low: number | null, high: number | null): Limits | null => (low === null && high === null ? null : { low, high });

/** A fit class was turned into its limits when it was saved: what is judged are the limits. */
export function judgedOf(characteristic: TriedCharacteristic): JudgedCharacteristic {
  return {
    kind: characteristic.kind === "fit" ? "limits" : characteristic.kind,
    printLimits: limitsOf(characteristic.printLowerMm, characteristic.printUpperMm),
    finalLimits: limitsOf(characteristic.lowerMm, characteristic.upperMm),
    places: characteristic.places,
    critical: characteristic.critical,
  };
}

export interface FoundOnPrint {
  readingsMm: readonly number[];
  answers: readonly boolean[];
  uncertaintyMm: number | null;
}

/** The verdict on what was found on a print: simple acceptance against the print limits. */
export function judgeOnPrint(characteristic: TriedCharacteristic, found: FoundOnPrint): Judgement {
  const readings = characteristic.kind === "yes-no" ? found.answers : found.readingsMm;
  return judge(judgedOf(characteristic), readings, { uncertainty: found.uncertaintyMm, stage: "print" });
}

export type FitMark = "met" | "open" | "failed";

export const markOf = (verdict: Judgement["verdict"]): FitMark => (verdict === "conforms" ? "met" : verdict === "fails" ? "failed" : "open");

/**
 * A small length in words, "0.06" or "0.0024": as many decimals as are needed to be within a
 * twentieth of it, two at least in mm and four in inches, so that what is not nothing never reads as nothing.
 */
export function amountText(mm: number, unit: LengthUnit): string {
  const value = fromMm(mm, unit);
  const [least, most] = unit === "mm" ? [2, 5] : [4, 6];
  for (let digits = least; digits < most; digits++) {
    const text = value.toFixed(digits);
    if (value === 0 || Math.abs(Number(text) - value) <= value / 20) return text;
  }
  return value.toFixed(most);
}

/** How far inside its limits a reading lies, from the nearer one; null without limits. */
export function roomInside(readingMm: number, limits: Limits | null): number | null {
  if (limits === null) return null;
  const rooms = [limits.low === null ? null : readingMm - limits.low, limits.high === null ? null : limits.high - readingMm].filter((room) => room !== null);
  return rooms.length === 0 ? null : Math.max(0, Math.min(...rooms));
}

/** "fails by 0.06", "inside by 0.02", "no limits": one place, at once. */
export function placeWords(characteristic: TriedCharacteristic, reading: number | boolean, unit: LengthUnit): { mark: FitMark; words: string } {
  if (typeof reading === "boolean") return reading ? { mark: "met", words: "yes" } : { mark: "failed", words: "no, it fails" };
  const judgement = judge(judgedOf(characteristic), [reading], { uncertainty: null, stage: "print" });
  const place = judgement.places[0]!;
  if (place.verdict === "fails") return { mark: "failed", words: `fails by ${amountText(place.outBy, unit)}` };
  const room = roomInside(reading, judgement.limits);
  return room === null ? { mark: "open", words: "no print limits" } : { mark: "met", words: room === 0 ? "on the limit" : `inside by ${amountText(room, unit)}` };
}

/** The verdict over all places: "inside at three places", "fails by 0.06", "two places to go". */
export function verdictWords(characteristic: TriedCharacteristic, judgement: Judgement, unit: LengthUnit): { mark: FitMark; words: string } {
  const mark = markOf(judgement.verdict);
  const yesNo = characteristic.kind === "yes-no";
  if (judgement.verdict === "fails") {
    if (yesNo) return { mark, words: "answered no" };
    const failing = judgement.places.filter(({ verdict }) => verdict === "fails").length;
    return { mark, words: `fails by ${amountText(judgement.outBy, unit)}${characteristic.places > 1 ? ` at ${inLetters(failing)} of ${inLetters(characteristic.places)} places` : ""}` };
  }
  if (judgement.verdict === "conforms") return { mark, words: yesNo ? "answered yes" : characteristic.places > 1 ? characteristic.places === 2 ? "inside at both places" : `inside at all ${inLetters(characteristic.places)} places` : "inside" };
  if (judgement.places.length === 0) return { mark, words: "not tried" };
  if (judgement.limits === null && !yesNo) return { mark, words: "no print limits to judge by" };
  return { mark, words: judgement.placesMissing === 1 ? "one place to go" : `${inLetters(judgement.placesMissing)} places to go` };
}

/** "62.15 to 62.20 mm on the print", in the unit asked for, as fine as the limits are stated. */
export function printLimitsText(characteristic: TriedCharacteristic, unit: LengthUnit): string | null {
  const limits = limitsOf(characteristic.printLowerMm, characteristic.printUpperMm);
  if (limits === null || characteristic.kind === "yes-no") return null;
  const shown = [limits.low, limits.high].map((mm) => (mm === null ? null : Number(fromMm(mm, unit).toFixed(unit === "mm" ? 4 : 5))));
  const [first, second] = alignedDecimals(shown.filter((value) => value !== null));
  if (characteristic.kind === "max" || limits.low === null) return `at most ${second ?? first} ${unit} on the print`;
  if (characteristic.kind === "min" || limits.high === null) return `at least ${first} ${unit} on the print`;
  return `${first} to ${second} ${unit} on the print`;
}

const figures = ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven", "twelve"];
const inLetters = (count: number) => figures[count] ?? String(count);
const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

/** One sentence over all that was tried. */
export function fitSentence(verdicts: readonly Judgement["verdict"][]): { mark: FitMark; sentence: string } {
  const failed = verdicts.filter((verdict) => verdict === "fails").length;
  const inside = verdicts.filter((verdict) => verdict === "conforms").length;
  const open = verdicts.length - failed - inside;
  if (verdicts.length === 0) return { mark: "open", sentence: "Nothing was tried" };
  if (failed > 0) return { mark: "failed", sentence: verdicts.length === 1 ? "It does not fit" : capital(`${inLetters(failed)} of ${inLetters(verdicts.length)} ${failed === 1 ? "does" : "do"} not fit`) };
  if (open > 0) return { mark: "open", sentence: inside === 0 ? "Nothing is decided yet" : capital(`${inLetters(inside)} of ${inLetters(verdicts.length)} fit, ${inLetters(open)} ${open === 1 ? "is" : "are"} open`) };
  return { mark: "met", sentence: verdicts.length === 1 ? "It fits" : verdicts.length === 2 ? "It fits: both are inside" : `It fits: all ${inLetters(verdicts.length)} are inside` };
}

export const causeWords = { design: "the design", print: "the print", misread: "a wrong reading of the mating part" } as const;

export interface TrustedInstrument {
  name: string;
  uncertaintyMm: number;
  trust: "calibrated" | "checked" | "unverified";
  calibratedUntil: string | null;
  checkedOn: string | null;
  checkedWith: string;
}

/**
 * "± 0.01 mm, checked on the ring today"; a calibration that ran out says so.
 *
 * @param today yyyy-mm-dd
 * @param sayDay how a day of that form is said
 */
export function trustWords(instrument: TrustedInstrument, unit: LengthUnit, today: string, sayDay: (day: string) => string): string {
  const u = `± ${amountText(instrument.uncertaintyMm, unit)} ${unit}`;
  const { trust, calibratedUntil, checkedOn, checkedWith } = instrument;
  switch (trust) {
    case "calibrated":
      if (calibratedUntil === null) return `${u}, calibrated`;
      return `${u}, ${calibratedUntil < today ? "calibration ran out on" : "calibrated until"} ${sayDay(calibratedUntil)}`;
    case "checked":
      return `${u}, checked${checkedWith ? ` on the ${checkedWith}` : ""}${checkedOn === null ? "" : checkedOn === today ? " today" : `, ${sayDay(checkedOn)}`}`;
    case "unverified":
      return `${u}, unverified`;
  }
}
