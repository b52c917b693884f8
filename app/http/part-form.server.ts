import { z } from "zod";
import type { PartValues } from "#app/data/parts.server.ts";
import { fluids } from "#app/domain/cautions.ts";
import { alwaysRequiredLines, gateLines } from "#app/domain/gate-records.ts";
import { chosenOrNull, number, numberOrNull, ticked, words } from "./fields.server.ts";
import { parseForm, type ParsedForm } from "./form.server.ts";

const partForm = z.object({
  number: words("Give the part a number", 40),
  name: words("Give the part a name"),
  kit: z.enum(["plate", "flange", "rotor", "bracket", "housing"], { error: "Pick the kind of part" }),
  materialId: chosenOrNull,
  quantity: number("Say how many pieces", { min: 1, max: 10_000, whole: true }),
  speedRpm: numberOrNull({ min: 0, max: 10_000_000 }),
  pressureMPa: numberOrNull({ min: 0, max: 10_000 }),
  temperatureC: numberOrNull({ min: -273.15, max: 5000 }),
  fluid: z.enum([...fluids, ""], { error: "Pick one of the list" }).transform((text) => text || null),
  lifting: ticked,
});

const hazard = z.enum(["no", "none", "pressure", "burst"], { error: "Pick one of the list" });

/** Fields `line-…` and `calculation-…` say what the gate asks of the part. */
export function readPartForm(form: FormData, calculationKinds: readonly string[]): ParsedForm<PartValues> {
  const asked = z.object(Object.fromEntries(calculationKinds.map((kind) => [`calculation-${kind}`, hazard])));
  const read = parseForm(partForm.and(asked), form);
  if (!read.ok) return read;
  const { number: partNumber, name, kit, materialId, quantity, speedRpm, pressureMPa, temperatureC, fluid, lifting } = read.value;
  return {
    ok: true,
    value: {
      number: partNumber, name, kit, materialId, quantity, speedRpm, pressureMPa, temperatureC, fluid, lifting,
      requiredLines: gateLines.filter((line) => alwaysRequiredLines.includes(line) || form.get(`line-${line}`)),
      requiredCalculations: calculationKinds.flatMap((kind) => {
        const chosen = hazard.parse(form.get(`calculation-${kind}`) ?? "no");
        return chosen === "no" ? [] : [{ kind, hazard: chosen }];
      }),
    },
  };
}
