import { href, redirect } from "react-router";
import { CharacteristicFields, characteristicLabels } from "#app/components/characteristic-fields.tsx";
import { ConflictNotice, EntryForm, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { lengthEntry } from "#app/components/measure-text.ts";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findCharacteristic, listCharacteristics, type CharacteristicValues } from "#app/data/characteristics.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { listMatingParts } from "#app/data/mating-parts.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { readCharacteristicForm } from "#app/http/characteristic-form.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { FieldErrors, LengthUnit } from "#app/http/form.server.ts";
import { mistaken, overtaken, readVersion, typedValues } from "#app/http/refusals.server.ts";
import { createCharacteristic, editCharacteristic, putCharacteristicAside, type CharacteristicRefusal } from "#app/services/characteristics.server.ts";
import type { Route } from "./+types/characteristic.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.characteristic?.name ?? "New characteristic"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job, part, characteristic }) => [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    { label: part.name, to: href("/parts/:partId", { partId: part.id }) },
    { label: characteristic?.name ?? "New characteristic" },
  ],
};

/** /parts/:partId/characteristics/new and /characteristics/:characteristicId. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "part:write");
  return inShop(viewer, async (tx) => {
    const characteristic = params.characteristicId ? orNotFound(await findCharacteristic(tx, idParam(params.characteristicId))) : null;
    const part = orNotFound(await findPart(tx, characteristic?.partId ?? idParam(params.partId)));
    const job = orNotFound(await findJob(tx, part.jobId));
    const matingParts = (await listMatingParts(tx, job.id)).filter(({ id, setAside }) => !setAside || id === characteristic?.matingPartId);
    return {
      job: { id: job.id, number: job.number, title: job.title },
      part: { id: part.id, name: part.name },
      characteristic,
      matingParts: matingParts.map(({ id, name }) => ({ value: id, label: name })),
      // "Add it, then another" comes back to this address: another count is another, empty form.
      count: (await listCharacteristics(tx, part.id, { withSetAside: true })).length,
    };
  });
}

const refusalErrors: Record<CharacteristicRefusal, FieldErrors> = {
  "no-such-class": { fitClass: ["This size and class are outside the tables of ISO 286. Give a class such as H7 or g6, or give limits instead"] },
  "no-such-mating-part": { matingPartId: ["Pick hardware of this job"] },
  tried: { kind: ["It was tried already, and its results would lose their meaning. Set it aside and add another"] },
};

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "part:write");
  const id = params.characteristicId === undefined ? null : idParam(params.characteristicId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (id && (intent === "set-aside" || intent === "take-up")) {
    const { partId } = await inShop(viewer, (tx) => putCharacteristicAside(tx, viewer, id, intent === "set-aside"));
    return redirect(href("/parts/:partId", { partId }));
  }
  const read = readCharacteristicForm(form);
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => (id ? editCharacteristic(tx, viewer, id, readVersion(form), read.value) : createCharacteristic(tx, viewer, idParam(params.partId), read.value)));
  if (saved.ok) {
    const again = intent === "save-and-add";
    return redirect(again ? href("/parts/:partId/characteristics/new", { partId: saved.partId }) : href("/parts/:partId", { partId: saved.partId }));
  }
  if (saved.reason === "changed") {
    const units = form.get("units") === "in" ? "in" : "mm";
    const names = await inShop(viewer, (tx) => listMatingParts(tx, saved.current.jobId));
    // The class of a fit says its limits; they are not fields of the form.
    const shown = (values: CharacteristicValues) => entryTexts(values.kind === "fit" ? { ...values, lowerMm: null, upperMm: null } : values, units, (one) => names.find(({ id: its }) => its === one)?.name ?? "");
    return overtaken(form, { labels: characteristicLabels, yours: shown(read.value), theirs: shown(saved.current), rowVersion: saved.current.rowVersion });
  }
  return mistaken({ errors: refusalErrors[saved.reason], values: typedValues(form) }, saved.reason === "tried" ? 409 : 400);
}

/** Each field as it stands in the form; a mating part by its name. */
function entryTexts(values: CharacteristicValues, units: LengthUnit, nameOf: (id: string) => string): Record<string, string> {
  const text = (name: string, value: string | number | boolean | null) => {
    if (value === null) return "";
    if (name === "matingPartId") return nameOf(String(value));
    if (typeof value === "number" && name.endsWith("Mm")) return lengthEntry(value, units);
    return typeof value === "boolean" ? (value ? "yes" : "no") : String(value);
  };
  return Object.fromEntries(Object.keys(characteristicLabels).map((name) => [name, text(name, values[name as keyof CharacteristicValues])]));
}

export default function CharacteristicPage({ loaderData, actionData }: Route.ComponentProps) {
  const { part, characteristic, matingParts } = loaderData;
  return (
    <Sheet>
      <SheetHeading title={characteristic ? characteristic.name : `What must hold on ${part.name}?`} lead={characteristic?.setAside ? "Set aside: kept for the results it has, asked no more." : undefined} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm key={loaderData.count} errors={actionData?.errors} values={actionData?.values} labels={characteristicLabels}>
          {characteristic && <RowVersion value={actionData?.rowVersion ?? characteristic.rowVersion} />}
          <CharacteristicFields entry={characteristic} matingParts={matingParts} />
          <div className="flex flex-wrap gap-3">
            <SubmitButton name="intent" value="save">{characteristic ? "Save" : "Add it"}</SubmitButton>
            {!characteristic && (
              <SubmitButton name="intent" value="save-and-add" weight="secondary">
                Add it, then another
              </SubmitButton>
            )}
          </div>
        </EntryForm>
        {characteristic && (
          <EntryForm intent={characteristic.setAside ? "take-up" : "set-aside"} className="mt-8">
            <SubmitButton weight="quiet">{characteristic.setAside ? "Take up again" : "Set aside"}</SubmitButton>
          </EntryForm>
        )}
      </div>
    </Sheet>
  );
}
