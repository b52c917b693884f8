import { useState } from "react";
import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Empty } from "#app/components/empty.tsx";
import { DateField, NumberField, RadioRow, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProvesField } from "#app/components/proves-field.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { listRevisionFiles } from "#app/data/files.server.ts";
import { listPresetsToPick } from "#app/data/prints.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosen, day, numberOrNull, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { recordPrint } from "#app/services/prints.server.ts";
import type { Route } from "./+types/print-new.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Record a print of ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Record a print") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "print:record");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const models = (await listRevisionFiles(tx, place.revision.id)).filter(({ role, state }) => (role === "stl" || role === "step") && state === "stored");
    return {
      place,
      presets: await listPresetsToPick(tx),
      // The STL first: it is what a slicer usually gets.
      models: models.map(({ id, name, role }) => ({ id, name, role })).sort((a, b) => b.role.localeCompare(a.role)),
      characteristics: (await listCharacteristics(tx, place.part.id)).filter(({ provableOnPrint }) => provableOnPrint).map(({ id, name }) => ({ id, name })),
      today: new Date().toISOString().slice(0, 10),
    };
  });
}

const scale = numberOrNull({ min: 0.2, max: 5 });
const printForm = z
  .object({
    presetId: chosen("Pick the preset it was printed with"),
    fileId: chosen("Pick the file it was sliced from"),
    whole: z.enum(["whole", "partial"], { error: "Say whether it is the whole part" }).transform((value) => value === "whole"),
    piece: wordsOrNone(200),
    proves: z.array(z.uuid()).max(200).default([]),
    scaleX: scale,
    scaleY: scale,
    scaleZ: scale,
    printedOn: day("Give the day it was printed"),
    note: wordsOrNone(2000),
  })
  .superRefine((value, context) => {
    if (value.whole) return;
    if (!value.piece) context.addIssue({ code: "custom", path: ["piece"], message: "Say what piece it is: a slice, a template, a coupon" });
    if (value.proves.length === 0) context.addIssue({ code: "custom", path: ["proves"], message: "Mark what this piece can prove" });
  });

const gone = {
  presetId: "This preset was set aside meanwhile. Pick another",
  fileId: "This file was replaced meanwhile. Pick the one it was sliced from",
  proves: "A characteristic was set aside meanwhile. Mark them again",
};

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "print:record");
  const formData = await request.formData();
  const form = parseForm(printForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const { scaleX, scaleY, scaleZ, ...value } = form.value;
  const recorded = await recordPrint(viewer, idParam(params.revisionId), { ...value, scale: { x: scaleX, y: scaleY, z: scaleZ } });
  if (recorded.ok) return redirect(href("/prints/:printId", { printId: recorded.printId }));
  const errors: Record<string, string[]> = recorded.reason === "sealed" ? { form: ["This revision was released and is sealed: no print can be added to it. Make the next revision, and print that."] } : { [recorded.field]: [gone[recorded.field]] };
  return data({ errors, values: textValues(formData) }, { status: 409 });
}

/** What was typed, so that a refused form comes back filled. */
function textValues(formData: FormData): Record<string, string> {
  return Object.fromEntries([...new Set(formData.keys())].map((name) => [name, formData.getAll(name).map(String).join(", ")]));
}

const labels = { presetId: "Preset", fileId: "Sliced from", whole: "How much of it", piece: "What piece", proves: "What it can prove", scaleX: "Scale in X", scaleY: "Scale in Y", scaleZ: "Scale in Z", printedOn: "Printed on" };

export default function PrintNewPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, presets, models, characteristics, today } = loaderData;
  const values = actionData?.values;
  const [presetId, setPresetId] = useState(values?.presetId ?? (presets.length === 1 ? presets[0]!.id : ""));
  const [whole, setWhole] = useState(values?.whole ?? "whole");
  const preset = presets.find(({ id }) => id === presetId);
  const scaleHint = (axis: "x" | "y" | "z") => (preset ? `Empty: ${preset.scale[axis]}, as the preset says` : "Empty: as the preset says");
  const missing = models.length === 0 || presets.length === 0;
  return (
    <Sheet>
      <SheetHeading title={`A print of ${place.part.name} ${place.revision.ordinal}`} lead="It counts for the file it was sliced from. Never spin a print under power." />
      {place.revision.sealed ? (
        <Notice kind="info">This revision was released and is sealed: no print can be added to it.</Notice>
      ) : missing ? (
        <>
          {models.length === 0 && (
            <Empty action={<LinkButton to={href("/revisions/:revisionId/files", { revisionId: place.revision.id })} weight="primary">Upload a model</LinkButton>}>
              This revision has no stored model yet that a print could be sliced from.
            </Empty>
          )}
          {presets.length === 0 && <Empty action={<LinkButton to={href("/shop/presets")}>Add a preset</LinkButton>}>The shop has no print preset yet. A preset is set up once, and picked from then on.</Empty>}
        </>
      ) : (
        <EntryForm
          errors={actionData?.errors}
          values={values}
          labels={labels}
          className="max-w-3xl"
          onChange={(event) => {
            const target = event.target as unknown as HTMLInputElement;
            if (target.name === "presetId") setPresetId(target.value);
            if (target.name === "whole") setWhole(target.value);
          }}
        >
          <FieldGroup>
            <SelectField name="presetId" label="Preset" prompt={presets.length === 1 ? undefined : "Pick a preset"} defaultValue={presetId} options={presets.map(({ id, words }) => ({ value: id, label: words }))} />
            <SelectField name="fileId" label="Sliced from" defaultValue={models[0]!.id} options={models.map(({ id, name, role }) => ({ value: id, label: `${name} (${role === "stl" ? "STL" : "STEP"})` }))} />
          </FieldGroup>
          <FieldGroup>
            <RadioRow
              name="whole"
              label="How much of it"
              defaultValue="whole"
              options={[
                { value: "whole", label: "The whole part" },
                { value: "partial", label: "A piece of it" },
              ]}
            />
            {whole === "partial" && <TextField name="piece" label="What piece" hint="A slice of the bore, a template of the hole circle, a coupon" maxLength={200} />}
            {whole === "partial" &&
              (characteristics.length > 0 ? <ProvesField characteristics={characteristics} /> : <p className="entry text-soft">The part has no characteristic yet that a print could prove.</p>)}
          </FieldGroup>
          <FieldGroup legend="Scale that was applied" columns={3}>
            <NumberField name="scaleX" label="In X" optional hint={scaleHint("x")} />
            <NumberField name="scaleY" label="In Y" optional hint={scaleHint("y")} />
            <NumberField name="scaleZ" label="In Z" optional hint={scaleHint("z")} />
          </FieldGroup>
          <FieldGroup columns={2}>
            <DateField name="printedOn" label="Printed on" defaultValue={today} max={today} />
            <TextArea name="note" label="Note" optional rows={2} wide maxLength={2000} />
          </FieldGroup>
          <SubmitButton pendingText="Recording">Record the print</SubmitButton>
        </EntryForm>
      )}
    </Sheet>
  );
}
