/** What is known of an instrument's readings; days as yyyy-mm-dd. */
export interface InstrumentTrust {
  trust: "calibrated" | "checked" | "unverified";
  calibratedUntil: string | null;
  checkedOn: string | null;
  /** "gauge block 25 mm", "setting ring 40 mm" */
  checkedWith: string;
}

export interface TrustToday {
  trusted: boolean;
  words: string;
}

/**
 * May an instrument's uncertainty be believed today, and how is that said? A calibration holds to the
 * end of its last day; a check on a gauge block or ring holds for the day on which it was made.
 *
 * @param today yyyy-mm-dd
 * @param day how a day is written
 */
export function trustToday({ trust, calibratedUntil, checkedOn, checkedWith }: InstrumentTrust, today: string, day: (iso: string) => string = (iso) => iso): TrustToday {
  if (trust === "calibrated" && calibratedUntil !== null) {
    return calibratedUntil >= today
      ? { trusted: true, words: `calibrated until ${day(calibratedUntil)}` }
      : { trusted: false, words: `calibration ran out on ${day(calibratedUntil)}` };
  }
  if (trust === "checked" && checkedOn !== null) {
    const on = checkedWith ? ` on ${checkedWith}` : "";
    return checkedOn === today ? { trusted: true, words: `checked today${on}` } : { trusted: false, words: `not checked today; last on ${day(checkedOn)}${on}` };
  }
  return { trusted: false, words: "unverified" };
}
