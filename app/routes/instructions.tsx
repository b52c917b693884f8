import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { useLive } from "#app/components/live.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Facts } from "#app/components/facts.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { proposeInstructions, saveInstructions } from "#app/services/instructions.server.ts";
import type { Route } from "./+types/instructions.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Instructions · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Instructions") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "instructions:read");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    return { place, proposed: await proposeInstructions(tx, place.revision.id), mayWrite: can(viewer.roles, "instructions:write") && !place.revision.sealed };
  });
}

const statement = wordsOrNone(1000);
const instructionForm = z.object({
  generalTolerance: statement,
  datums: statement,
  criticalSurfaces: statement,
  edgeBreak: statement,
  coating: statement,
  modelSha256: z.string().length(64),
  rowVersion: z.string().transform((text) => (text === "" ? null : Number(text))),
  intent: z.enum(["save", "confirm"]),
});
const treatment = z.enum(["tap", "clearance", "ream", "leave"]).nullable();

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "instructions:write");
  const revisionId = idParam(params.revisionId);
  const formData = await request.formData();
  const form = parseForm(instructionForm, formData);
  const values = Object.fromEntries(formData) as Record<string, string>;
  if (!form.ok) return data({ errors: form.errors, values }, { status: 400 });
  const count = [...formData.keys()].filter((name) => /^treatment-\d+$/.test(name)).length;
  const treatments = Array.from({ length: count }, (_, i) => ({ treatment: treatment.catch(null).parse(formData.get(`treatment-${i}`) || null), spec: String(formData.get(`spec-${i}`) ?? "").trim().slice(0, 200) }));
  const errors: Record<string, string[]> = {};
  if (form.value.intent === "confirm") {
    for (const name of ["generalTolerance", "datums", "criticalSurfaces", "edgeBreak", "coating"] as const) if (!form.value[name]) errors[name] = ["State it, or write “none”"];
    treatments.forEach((hole, i) => {
      if (hole.treatment === null) errors[`treatment-${i}`] = ["Say what the machinist does with it"];
      if (hole.treatment === "tap" && !hole.spec) errors[`spec-${i}`] = ["Name the thread, such as M6x1"];
    });
  }
  if (Object.keys(errors).length > 0) return data({ errors, values }, { status: 400 });
  const { intent, ...stated } = form.value;
  const saved = await saveInstructions(viewer, revisionId, { ...stated, treatments, confirm: intent === "confirm" });
  if (saved.ok) return redirect(href("/revisions/:revisionId/instructions", { revisionId }));
  const why = { sealed: "This revision was released: its instructions can't change.", changed: "Somebody saved the instructions meanwhile. Load the page again and put your changes in.", "model-changed": "The model changed while you were writing: the holes are other ones now. Load the page again." };
  return data({ errors: { form: [why[saved.reason]] } as Record<string, string[]>, values }, { status: 409 });
}

const labels = { generalTolerance: "General tolerance", datums: "Datums", criticalSurfaces: "Critical surfaces", edgeBreak: "Edges", coating: "Coating" };
const treatments = [
  { value: "tap", label: "tap" },
  { value: "clearance", label: "clearance" },
  { value: "ream", label: "ream" },
  { value: "leave", label: "leave as modelled" },
];

export default function InstructionsPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, proposed, mayWrite } = loaderData;
  useLive(place.job.id);
  const { confirmed, model, holes, values } = proposed;
  return (
    <Sheet>
      <SheetHeading
        title="What a STEP does not carry"
        lead={confirmed ? <>Confirmed by {confirmed.name}, <Day at={confirmed.at} time />{confirmed.stale ? ", for another model: look again and confirm." : "."}</> : "Threads, tolerances, datums, edges, coating: the machinist cuts by this."}
      />
      {!model ? (
        <Notice kind="info" action={<LinkButton to={href("/revisions/:revisionId/files", { revisionId: place.revision.id })}>To the files</LinkButton>}>
          The holes are taken from the STEP once it is stored and measured. There is none yet.
        </Notice>
      ) : mayWrite ? (
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels}>
          <input type="hidden" name="modelSha256" value={model.sha256} />
          <input type="hidden" name="rowVersion" value={proposed.rowVersion ?? ""} />
          <FieldGroup legend="Holes" hint={holes.length === 0 ? "No holes were recognised in the STEP." : `Recognised in ${model.name}; alike holes stand together.`} columns={1}>
            {holes.map((hole, i) => (
              <div key={hole.label} className="grid grid-cols-1 sm:grid-cols-[minmax(0,2fr)_minmax(0,1fr)_minmax(0,1.4fr)]">
                <p className="entry flex items-center font-medium">{hole.label}</p>
                <SelectField name={`treatment-${i}`} label="What to do" prompt="not stated" optional defaultValue={hole.treatment} options={treatments} />
                <TextField name={`spec-${i}`} label="To" optional defaultValue={hole.spec} placeholder="M6x1, H7, Ø 6.6" />
              </div>
            ))}
          </FieldGroup>
          <FieldGroup legend="Surfaces, edges, coating" columns={2}>
            <TextField name="generalTolerance" label={labels.generalTolerance} optional defaultValue={values.generalTolerance} suggestions={["ISO 2768-m", "ISO 2768-f", "ISO 2768-mK"]} />
            <TextField name="edgeBreak" label={labels.edgeBreak} optional defaultValue={values.edgeBreak} />
            <TextArea name="datums" label={labels.datums} optional defaultValue={values.datums} hint="From which faces everything is measured." />
            <TextArea name="criticalSurfaces" label={labels.criticalSurfaces} optional defaultValue={values.criticalSurfaces} hint="Sealing faces, bores: finish and why." />
            <TextField name="coating" label={labels.coating} optional defaultValue={values.coating} wide />
          </FieldGroup>
          <div className="flex flex-wrap gap-3">
            <SubmitButton name="intent" value="confirm" pendingText="Confirming">
              Confirm for this model
            </SubmitButton>
            <SubmitButton name="intent" value="save" weight="secondary">
              Save, confirm later
            </SubmitButton>
          </div>
        </EntryForm>
      ) : (
        <>
          <Section title="Holes">
            <Facts align="left" facts={holes.map((hole, i) => ({ key: String(i), label: hole.label, value: `${treatments.find(({ value }) => value === hole.treatment)?.label ?? "not stated"}${hole.spec ? `, ${hole.spec}` : ""}` }))} />
          </Section>
          <Section title="Surfaces, edges, coating">
            <Facts align="left" facts={(Object.keys(labels) as Array<keyof typeof labels>).map((name) => ({ label: labels[name], value: values[name] || "not stated" }))} />
          </Section>
        </>
      )}
    </Sheet>
  );
}
