import { data, href, redirect } from "react-router";
import { z } from "zod";
import { NumberField, RadioRow, SelectField, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findJob } from "#app/data/jobs.server.ts";
import { listMaterialNames } from "#app/data/materials.server.ts";
import { listPartsOfJob } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { kits } from "#app/engineering/kits.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosenOrNull, number, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { createPart, createRevision } from "#app/services/parts.server.ts";
import type { Route } from "./+types/part-new.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Add a part · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job }) => [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: "Add a part" }],
};

const partForm = z.object({
  name: words("Give the part a name"),
  number: words("Give the part a number", 40),
  kit: z.enum(["plate", "flange", "rotor", "bracket", "housing"], { error: "Pick the kind of part" }),
  materialId: chosenOrNull,
  quantity: number("Say how many pieces", { min: 1, max: 10_000, whole: true }),
});

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "part:write");
  return inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, idParam(params.jobId)));
    const parts = await listPartsOfJob(tx, job.id);
    return {
      job: { id: job.id, number: job.number, title: job.title },
      materials: await listMaterialNames(tx),
      offeredNumber: `${job.number}-${String(parts.length + 1).padStart(2, "0")}`,
    };
  });
}

/** A part begins with its revision 1, so that the next step is to drop the model. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "part:write");
  const jobId = idParam(params.jobId);
  const form = parseForm(partForm, await request.formData());
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const made = await inShop(viewer, async (tx) => {
    const part = await createPart(tx, viewer, jobId, { ...form.value, speedRpm: null, pressureMPa: null, temperatureC: null, fluid: null, lifting: false });
    if (!part.ok) return null;
    const first = await createRevision(tx, viewer, part.id, { parentId: null, branchName: null, reason: "First model, from what was measured" });
    return first.ok ? first.id : null;
  });
  if (!made) return data({ errors: { number: ["Another part has this number"] }, values: { ...form.value, materialId: form.value.materialId ?? "", quantity: String(form.value.quantity) } as Record<string, string> }, { status: 400 });
  return redirect(href("/revisions/:revisionId/files", { revisionId: made }));
}

const about: Record<string, string> = {
  plate: "flat, holes and an outline",
  flange: "seals and is screwed on",
  rotor: "turns: speed is asked",
  bracket: "carries, threads in metal",
  housing: "holds pressure or heat",
};

export default function PartNewPage({ loaderData, actionData }: Route.ComponentProps) {
  const { materials } = loaderData;
  return (
    <Sheet>
      <SheetHeading title="Add a part" lead="The kind of part decides which gate lines, calculations and cautions it begins with. All of it can be changed." />
      <div className="max-w-3xl">
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={{ name: "Part", number: "Number", kit: "Kind", quantity: "Pieces", materialId: "Stock" }}>
          <FieldGroup columns={2}>
            <TextField name="name" label="Part" placeholder="Filler flange" />
            <TextField name="number" label="Number" defaultValue={loaderData.offeredNumber} />
            <RadioRow name="kit" label="Kind" options={kits.map(({ kit, title }) => ({ value: kit, label: title, hint: about[kit] }))} defaultValue="plate" wide />
            <SelectField name="materialId" label="Stock" optional prompt="Decide later" options={materials.map(({ id, name, code }) => ({ value: id, label: code === name ? name : `${code}, ${name}` }))} />
            <NumberField name="quantity" label="Pieces" defaultValue={1} />
          </FieldGroup>
          <SubmitButton pendingText="Adding">Add it, then drop its model</SubmitButton>
        </EntryForm>
      </div>
    </Sheet>
  );
}
