import { href, redirect } from "react-router";
import { CheckField, NumberField, RadioRow, SelectField, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findJob } from "#app/data/jobs.server.ts";
import { listMaterialNames } from "#app/data/materials.server.ts";
import { findPart, type Part, type PartValues } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { fluids, fluidWords } from "#app/domain/cautions.ts";
import { alwaysRequiredLines, gateLines } from "#app/domain/gate-records.ts";
import { gateLineNeeds } from "#app/domain/gate-line-words.ts";
import { kits } from "#app/engineering/kits.ts";
import { calculations, findCalculation } from "#app/engineering/registry.ts";
import { requireCan } from "#app/http/context.server.ts";
import { readPartForm } from "#app/http/part-form.server.ts";
import { mistaken, overtaken, readVersion, typedValues } from "#app/http/refusals.server.ts";
import { editPart, putPartAside } from "#app/services/parts.server.ts";
import type { Route } from "./+types/part-edit.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.part.name} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job, part }) => [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    { label: part.name, to: href("/parts/:partId", { partId: part.id }) },
    { label: "Change" },
  ],
};

/** Kinds that can be required: all there are, and those the part asks for already. */
const kindsFor = (part: Pick<Part, "requiredCalculations">) => [...new Set([...calculations.map(({ kind }) => kind), ...part.requiredCalculations.map(({ kind }) => kind)])];

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "part:write");
  return inShop(viewer, async (tx) => {
    const part = orNotFound(await findPart(tx, idParam(params.partId)));
    const job = orNotFound(await findJob(tx, part.jobId));
    const materials = (await listMaterialNames(tx)).map(({ id, code, name }) => ({ value: id, label: code === name ? name : `${code}, ${name}` }));
    // Stock that was set aside meanwhile is still this part's stock.
    if (part.materialId && !materials.some(({ value }) => value === part.materialId)) materials.push({ value: part.materialId, label: `${part.materialName} (set aside)` });
    return { job: { id: job.id, number: job.number, title: job.title }, part, materials, kinds: kindsFor(part).map((kind) => ({ kind, title: findCalculation(kind)?.title ?? kind })) };
  });
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "part:write");
  const id = idParam(params.partId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (intent === "set-aside" || intent === "take-up") {
    await inShop(viewer, (tx) => putPartAside(tx, viewer, id, intent === "set-aside"));
    return redirect(href("/parts/:partId", { partId: id }));
  }
  const before = orNotFound(await inShop(viewer, (tx) => findPart(tx, id)));
  const read = readPartForm(form, kindsFor(before));
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => editPart(tx, viewer, id, readVersion(form), read.value));
  if (saved.ok) return redirect(href("/parts/:partId", { partId: id }));
  if (saved.reason === "number-taken") return mistaken({ errors: { number: ["Another part has this number"] }, values: typedValues(form) });
  const { current } = saved;
  const materials = await inShop(viewer, listMaterialNames);
  const shown = (values: PartValues) => entryTexts(values, (materialId) => (materialId === current.materialId ? current.materialName : materials.find((one) => one.id === materialId)?.name) ?? "");
  return overtaken(form, { labels: { ...labels, lines: "Lines", calculations: "Calculations" }, yours: shown(read.value), theirs: shown(current), rowVersion: current.rowVersion });
}

function entryTexts(values: PartValues, materialName: (id: string) => string): Record<string, string> {
  const text = (value: string | number | null) => (value === null ? "" : String(value));
  return {
    number: values.number,
    name: values.name,
    kit: values.kit,
    materialId: values.materialId === null ? "" : materialName(values.materialId),
    quantity: text(values.quantity),
    speedRpm: text(values.speedRpm),
    pressureMPa: text(values.pressureMPa),
    temperatureC: text(values.temperatureC),
    fluid: text(values.fluid),
    lifting: values.lifting ? "yes" : "no",
    lines: values.requiredLines.join(", "),
    calculations: values.requiredCalculations.map(({ kind, hazard }) => (hazard === "none" ? kind : `${kind} (${hazard})`)).sort().join(", "),
  };
}

const labels = { name: "Part", number: "Number", kit: "Kind", materialId: "Stock", quantity: "Pieces", speedRpm: "Speed", pressureMPa: "Pressure", temperatureC: "Temperature", fluid: "Fluid", lifting: "Lifts or carries people or loads" };

const hazardClasses = [
  { value: "no", label: "not required" },
  { value: "none", label: "required" },
  { value: "pressure", label: "required: it holds pressure" },
  { value: "burst", label: "required: it may burst" },
];

export default function PartEditPage({ loaderData, actionData }: Route.ComponentProps) {
  const { part, materials, kinds } = loaderData;
  const chosen = gateLines.filter((line) => !alwaysRequiredLines.includes(line));
  return (
    <Sheet>
      <SheetHeading title={part.name} lead={part.setAside ? "Set aside: kept for the record." : undefined} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          <RowVersion value={actionData?.rowVersion ?? part.rowVersion} />
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={part.name} />
            <TextField name="number" label={labels.number} defaultValue={part.number} />
            <RadioRow name="kit" label={labels.kit} options={kits.map(({ kit, title }) => ({ value: kit, label: title }))} defaultValue={part.kit} hint="Another kind leaves the lines and calculations below as they are; it may ask for other hazards to be stated." wide />
            <SelectField name="materialId" label={labels.materialId} optional prompt="Decide later" defaultValue={part.materialId} options={materials} />
            <NumberField name="quantity" label={labels.quantity} defaultValue={part.quantity} />
          </FieldGroup>
          <FieldGroup legend="In service" hint="Cautions follow from what is stated here. Leave empty what does not apply; state 0 where it was looked at and there is none." columns={2}>
            <NumberField name="speedRpm" label={labels.speedRpm} unit="rpm" optional defaultValue={part.speedRpm} />
            <NumberField name="pressureMPa" label={labels.pressureMPa} unit="MPa" optional defaultValue={part.pressureMPa} hint="1 bar is 0.1 MPa, 1 psi is 0.0069 MPa." />
            <NumberField name="temperatureC" label={labels.temperatureC} unit="°C" optional defaultValue={part.temperatureC} />
            <SelectField name="fluid" label={labels.fluid} optional prompt="not stated" defaultValue={part.fluid} options={fluids.map((fluid) => ({ value: fluid, label: fluidWords[fluid] }))} />
            <CheckField name="lifting" label={labels.lifting} defaultChecked={part.lifting} wide />
          </FieldGroup>
          <FieldGroup legend="What the gate asks for" hint="Model and cautions are always asked for." columns={2}>
            {chosen.map((line) => (
              <CheckField key={line} name={`line-${line}`} label={line} hint={gateLineNeeds[line]} defaultChecked={part.requiredLines.includes(line)} />
            ))}
          </FieldGroup>
          <FieldGroup legend="Calculations" hint="A failed calculation of something that holds pressure or may burst can be conceded only with a named approval from outside." columns={2}>
            {kinds.map(({ kind, title }) => (
              <SelectField key={kind} name={`calculation-${kind}`} label={title} defaultValue={part.requiredCalculations.find((one) => one.kind === kind)?.hazard ?? "no"} options={hazardClasses} />
            ))}
          </FieldGroup>
          <SubmitButton>Save</SubmitButton>
        </EntryForm>
        <EntryForm intent={part.setAside ? "take-up" : "set-aside"} className="mt-8">
          <SubmitButton weight="quiet">{part.setAside ? "Take up again" : "Set aside"}</SubmitButton>
        </EntryForm>
      </div>
    </Sheet>
  );
}
