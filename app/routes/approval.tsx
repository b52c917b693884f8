import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { CheckField, DateField, RadioRow, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { UploadPanel } from "#app/components/upload/upload-panel.tsx";
import { listAnswerPictures, listAnswersOfPart } from "#app/data/approvals.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { env } from "#app/env.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosenOrNull, day, ticked, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { answerRefusals, changesSince, recordAnswer, showToCustomer, standingApproval } from "#app/services/approvals.server.ts";
import { definingModel } from "#app/services/makeability.server.ts";
import type { Route } from "./+types/approval.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "The customer's answer · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "The customer's answer") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "approval:record");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const revision = orNotFound(await findRevision(tx, place.revision.id));
    const answers = await listAnswersOfPart(tx, revision.partId);
    const before = standingApproval(answers);
    const model = await definingModel(tx, revision.id);
    return {
      place,
      sharedAt: revision.sharedAt,
      answers,
      pictures: await listAnswerPictures(tx, revision.id),
      model,
      changes: before && before.modelSha256 !== model?.sha256 ? await changesSince(tx, revision, before.ordinal) : [],
      limits: { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB },
    };
  });
}

const recordForm = z
  .object({
    answer: z.enum(["yes", "no"], { error: "Say what the customer answered" }),
    reason: wordsOrNone(2000),
    name: words("Say who answered"),
    how: z.enum(["text-message", "e-mail", "call", "in-person", "letter"], { error: "Say how it came" }),
    saidOn: day("Say when"),
    pictureFileId: chosenOrNull,
    modelSha256: z.string(),
    changesSeen: ticked,
  })
  .superRefine((value, context) => {
    if (value.answer === "no" && !value.reason) context.addIssue({ code: "custom", path: ["reason"], message: "Say what is not right" });
  });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "approval:record");
  const revisionId = idParam(params.revisionId);
  const formData = await request.formData();
  const here = href("/revisions/:revisionId/approval", { revisionId });
  if (formData.get("intent") === "show") {
    const shown = await showToCustomer(viewer, revisionId);
    return shown.ok ? redirect(here) : data({ errors: { form: [answerRefusals[shown.reason]] } as Record<string, string[]>, values: {} as Record<string, string> }, { status: 409 });
  }
  const form = parseForm(recordForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const { answer, reason, modelSha256, changesSeen, ...recorded } = form.value;
  const saved = await recordAnswer(viewer, revisionId, { answer, reason, modelSha256, changesSeen }, recorded);
  if (saved.ok) return redirect(here);
  return data({ errors: { form: [answerRefusals[saved.reason]] } as Record<string, string[]>, values: Object.fromEntries(formData) as Record<string, string> }, { status: 409 });
}

const ways = [
  { value: "text-message", label: "text message" },
  { value: "call", label: "call" },
  { value: "e-mail", label: "e-mail" },
  { value: "in-person", label: "in person" },
  { value: "letter", label: "letter" },
];

export default function ApprovalPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, answers, model, pictures, changes, sharedAt } = loaderData;
  useLive(place.job.id);
  const last = answers[0];
  const title = !last ? "The customer has not answered" : last.answer === "refused" ? "The customer refused" : last.modelSha256 === model?.sha256 ? "The customer said yes" : "The customer said yes to another model";
  return (
    <Sheet>
      <SheetHeading title={title} lead={sharedAt ? <>Shown to the customer since <Day at={sharedAt} time />.</> : "Not shown to the customer yet."} />
      {!model && <Notice kind="info">There is no STEP yet to show.</Notice>}
      {model && !sharedAt && !place.revision.sealed && (
        <EntryForm intent="show" className="mb-6">
          <SubmitButton>Show it to the customer</SubmitButton>
        </EntryForm>
      )}
      {answers.length > 0 && (
        <ul className="mb-6 divide-y divide-hairline border-y border-hairline">
          {answers.map((one) => (
            <li key={one.id} className="py-3">
              <GateMark state={one.answer === "refused" ? "failed" : "met"} word={one.answer} /> revision {one.ordinal}, {one.byName}, <Day at={one.at} time />
              {one.recordedHow && <span className="text-soft">, recorded by {one.recordedByName} from a {ways.find(({ value }) => value === one.recordedHow)?.label} of {one.saidOn}: not the customer’s own click</span>}
              {one.reason && <p>“{one.reason}”</p>}
              {one.pictureFileId && <img src={href("/files/:fileId/:kind", { fileId: one.pictureFileId, kind: "thumbnail" })} alt="Picture of the answer" className="mt-2 max-h-40 border border-hairline" />}
            </li>
          ))}
        </ul>
      )}
      {model && !place.revision.sealed && (
        <Section title="Record an answer that came by text or call" ruled>
          <div className="max-w-3xl">
            <div className="mb-5">
              <UploadPanel target={{ to: "answer", id: place.revision.id }} limits={loaderData.limits} accepts={["photo"]} what="a picture of the message" camera />
            </div>
            <EntryForm intent="record" errors={actionData?.errors} values={actionData?.values} labels={{ answer: "Answer", name: "Who", how: "How", saidOn: "When", reason: "In their words" }}>
              <input type="hidden" name="modelSha256" value={model.sha256} />
              <FieldGroup columns={2}>
                <RadioRow name="answer" label="Answer" options={[{ value: "yes", label: "Yes, cut it" }, { value: "no", label: "Something is not right" }]} wide />
                <TextField name="name" label="Who" />
                <SelectField name="how" label="How it came" options={ways} defaultValue="text-message" />
                <DateField name="saidOn" label="When" defaultValue={new Date().toISOString().slice(0, 10)} />
                <SelectField name="pictureFileId" label="Picture" optional prompt="none" options={pictures.map(({ id, name }) => ({ value: id, label: name }))} defaultValue={pictures[0]?.id} hint="A text message or letter needs its picture." />
                <TextArea name="reason" label="In their words" optional rows={2} wide />
                {changes.length > 0 && <CheckField name="changesSeen" label="They were shown what changed" hint={changes.join("; ")} wide />}
              </FieldGroup>
              <SubmitButton pendingText="Recording">Record it</SubmitButton>
            </EntryForm>
          </div>
        </Section>
      )}
    </Sheet>
  );
}
