import { z } from "zod";
import type { CharacteristicKind, CharacteristicValues } from "#app/data/characteristics.server.ts";
import { chosenOrNull, length, lengthOrNull, number, ticked, words, wordsOrNone } from "./fields.server.ts";
import { parseForm, type LengthUnit, type ParsedForm } from "./form.server.ts";

export const characteristicKinds = ["limits", "fit", "min", "max", "yes-no"] as const satisfies readonly CharacteristicKind[];

/** A field that this kind does not need: whatever still stands in it is not judged and not kept. */
const notAsked = z.unknown().optional().transform(() => null);
const notAskedText = z.unknown().optional().transform(() => "");

/**
 * The fields of one kind. A size that a print is to prove needs print limits of its own, on the side
 * where the kind has a limit.
 */
function characteristicSchema(kind: CharacteristicKind, onPrint: boolean, units: LengthUnit) {
  const sized = kind !== "yes-no";
  const below = kind === "limits" || kind === "fit" || kind === "min";
  const above = kind === "limits" || kind === "fit" || kind === "max";
  const needPrint = "Give the limit that the print must hold, or say that a print can't show it";
  const shape = z.object({
    name: words("Give the characteristic a name", 120),
    kind: z.literal(kind),
    nominalMm: kind === "fit" ? length(units, "Give the nominal size", { above: 0, max: 500 }) : kind === "limits" ? lengthOrNull(units) : notAsked,
    lowerMm: kind === "limits" || kind === "min" ? length(units, "Give the lower limit") : notAsked,
    upperMm: kind === "limits" || kind === "max" ? length(units, "Give the upper limit") : notAsked,
    fitClass: kind === "fit" ? words("Give the class, such as H7", 10) : notAsked,
    printLowerMm: sized && onPrint && below ? length(units, needPrint) : notAsked,
    printUpperMm: sized && onPrint && above ? length(units, needPrint) : notAsked,
    question: kind === "yes-no" ? words("Write the question", 300) : notAskedText,
    method: wordsOrNone(200),
    places: number("Say at how many places", { min: 1, max: 50, whole: true }),
    matingPartId: chosenOrNull,
    required: ticked,
    critical: ticked,
    photoRequired: ticked,
    provableOnPrint: ticked,
  });
  return shape.superRefine((given, context) => {
    const order = (name: "upperMm" | "printUpperMm", low: number | null, high: number | null) => {
      if (low !== null && high !== null && low > high) context.addIssue({ code: "custom", path: [name], message: "The upper limit lies below the lower" });
    };
    order("upperMm", given.lowerMm, given.upperMm);
    order("printUpperMm", given.printLowerMm, given.printUpperMm);
  });
}

/** Reads the form by the kind that it says; fields of other kinds are left alone. */
export function readCharacteristicForm(form: FormData): ParsedForm<CharacteristicValues> {
  const kind = characteristicKinds.find((one) => one === form.get("kind"));
  if (!kind) return parseForm(z.object({ kind: z.enum(characteristicKinds, { error: "Say what kind of check it is" }) }) as unknown as z.ZodType<CharacteristicValues>, form);
  return parseForm<z.ZodType<CharacteristicValues>>((units) => characteristicSchema(kind, Boolean(form.get("provableOnPrint")), units), form);
}
