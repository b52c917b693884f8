import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { CheckField, TextArea } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { Steps } from "#app/components/steps.tsx";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { ticked, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { answerAsCustomer, answerRefusals } from "#app/services/approvals.server.ts";
import { loadCustomerPage } from "#app/services/customer-page.server.ts";
import type { Route } from "./+types/your-job.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.job.title} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ job }) => [{ label: job.title }] };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "approval:give");
  return inShop(viewer, (tx) => loadCustomerPage(tx, idParam(params.jobId)));
}

const answerForm = z
  .object({ revisionId: z.uuid(), modelSha256: z.string(), answer: z.enum(["yes", "no"]), reason: wordsOrNone(2000), changesSeen: ticked, mustSee: ticked })
  .superRefine((value, context) => {
    if (value.answer === "no" && !value.reason) context.addIssue({ code: "custom", path: ["reason"], message: "Say what is not right, in your own words" });
    if (value.answer === "yes" && value.mustSee && !value.changesSeen) context.addIssue({ code: "custom", path: ["changesSeen"], message: "Look at what changed first" });
  });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "approval:give");
  const formData = await request.formData();
  const form = parseForm(answerForm, formData);
  const of = String(formData.get("revisionId"));
  if (!form.ok) return data({ of, errors: form.errors, values: form.values }, { status: 400 });
  const { revisionId, answer, reason, modelSha256, changesSeen } = form.value;
  const saved = await answerAsCustomer(viewer, revisionId, { answer, reason, modelSha256, changesSeen });
  if (saved.ok) return redirect(href("/your-job/:jobId", { jobId: idParam(params.jobId) }));
  return data({ of, errors: { form: [answerRefusals[saved.reason]] } as Record<string, string[]>, values: form.value as unknown as Record<string, string> }, { status: 409 });
}

type Part = Route.ComponentProps["loaderData"]["parts"][number];

/** Where a part stands, in the customer's words. */
function sentence({ name, shown }: Part): string {
  if (!shown) return `${name}: we are measuring and printing.`;
  if (shown.released) return `${name}: it is being cut from solid.`;
  if (!shown.answer) return `${name}: please look, and say whether it is right.`;
  return shown.answer.word === "refused" ? `${name}: you said that something is not right. We are on it.` : `${name}: you said yes. Thank you.`;
}

export default function YourJobPage({ loaderData, actionData }: Route.ComponentProps) {
  const { job, parts, deposit, shopName } = loaderData;
  useLive(job.id);
  const waiting = parts.filter(({ shown }) => shown && !shown.released && !shown.answer).length;
  return (
    <Sheet
      rightLabel="Your job"
      right={
        <>
          {deposit && (
            <Section title="Paid and to pay">
              <Facts facts={[{ label: "Deposit", value: deposit.agreed }, { label: "Paid", value: deposit.paid }]} />
            </Section>
          )}
          {job.promise && (
            <Section title="What you wanted" ruled>
              <p>{job.promise}</p>
            </Section>
          )}
        </>
      }
    >
      <SheetHeading title={waiting === 0 ? "Nothing waits on you" : waiting === 1 ? "One thing waits on you" : `${waiting} things wait on you`} lead={`${shopName} keeps you up to date here.`} />
      {parts.length === 0 && <p className="text-soft">We have not begun a part yet.</p>}
      {parts.map((part) => (
        <Section key={part.id} title={sentence(part)} ruled>
          <Steps
            steps={[
              { label: "Measured", state: "done" },
              { label: "Printed, tried", state: part.shown ? "done" : "now" },
              { label: "Your look", state: !part.shown ? "ahead" : part.shown.answer && part.shown.answer.word !== "refused" ? "done" : part.shown.released ? "done" : "now" },
              { label: "Cut from billet", state: part.shown?.released ? "now" : "ahead" },
              { label: "Checked, delivered", state: "ahead" },
            ]}
          />
          {part.shown && (
            <>
              {part.shown.photos.map((photo) => (
                <Link key={photo.fileId} to={href("/photos/:fileId", { fileId: photo.fileId })} className="mt-4 block">
                  <img src={href("/files/:fileId/:kind", { fileId: photo.fileId, kind: "screen" })} alt={`Photo: ${photo.name}`} width={photo.width ?? undefined} height={photo.height ?? undefined} className="h-auto w-full border border-hairline" />
                  <span className="word mt-1 inline-block">Touch the photo to leave a callout where you see it</span>
                </Link>
              ))}
              {part.shown.model && (
                <p className="mt-3">
                  <Link className="word" to={href("/revisions/:revisionId", { revisionId: part.shown.revisionId })}>
                    Turn the model
                  </Link>
                </p>
              )}
              {part.shown.model && !part.shown.released && !part.shown.answer && (
                <div className="mt-5 max-w-xl">
                  <p className="mb-3 max-w-prose text-soft">We cut metal only after you say yes. After that, changes cost a new part.</p>
                  <EntryForm errors={actionData?.of === part.shown.revisionId ? actionData.errors : undefined} values={actionData?.of === part.shown.revisionId ? actionData.values : undefined} labels={{ reason: "What is not right" }}>
                    <input type="hidden" name="revisionId" value={part.shown.revisionId} />
                    <input type="hidden" name="modelSha256" value={part.shown.model.sha256} />
                    {part.shown.changes.length > 0 && (
                      <>
                        <input type="hidden" name="mustSee" value="on" />
                        <Notice kind="info">
                          <p className="font-semibold">Since you said yes, this changed:</p>
                          <ul className="list-disc pl-5">{part.shown.changes.map((text) => <li key={text}>{text}</li>)}</ul>
                        </Notice>
                      </>
                    )}
                    <FieldGroup>
                      {part.shown.changes.length > 0 && <CheckField name="changesSeen" label="I have seen what changed" />}
                      <TextArea name="reason" label="If something is not right, what is it?" optional rows={2} />
                    </FieldGroup>
                    <div className="grid gap-3">
                      <SubmitButton name="answer" value="yes" pendingText="Sending" bench wide>
                        Yes, cut it
                      </SubmitButton>
                      <SubmitButton name="answer" value="no" weight="secondary" pendingText="Sending" bench wide>
                        Something is not right
                      </SubmitButton>
                    </div>
                  </EntryForm>
                </div>
              )}
              {part.shown.answer && (
                <p className="mt-4 text-soft">
                  Your answer, <Day at={part.shown.answer.at} time />: {part.shown.answer.word}
                  {part.shown.answer.reason && `, “${part.shown.answer.reason}”`}
                </p>
              )}
            </>
          )}
          {part.tried && part.tried.length > 0 && (
            <div className="mt-4">
              <Facts facts={part.tried.map(({ ordinal, reason }) => ({ label: `Revision ${ordinal}`, value: reason }))} />
            </div>
          )}
        </Section>
      ))}
    </Sheet>
  );
}
