import { dayText } from "#app/components/day.tsx";
import { lengthIn, numberText, type LengthUnit } from "#app/components/measure-text.ts";
import { trustToday, type InstrumentTrust } from "#app/domain/trust.ts";

/** An instrument in a list to pick from: its name, its uncertainty, and whether that can be believed today. */
export function instrumentLabel(instrument: InstrumentTrust & { name: string; uncertaintyMm: number }, today: string, unit: LengthUnit): string {
  return `${instrument.name}, ± ${numberText(lengthIn(instrument.uncertaintyMm, unit))} ${unit}, ${trustWords(instrument, today)}`;
}

export function trustWords(instrument: InstrumentTrust, today: string): string {
  return trustToday(instrument, today, (at) => dayText({ at })).words;
}
