import { data, href, redirect } from "react-router";
import { Day } from "#app/components/day.tsx";
import { DateField, RadioRow, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { listQuestions, listReplies } from "#app/data/makeability.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { formatMoney, parseMoney } from "#app/domain/money.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { answerMakeability, definingModel, settleObjection } from "#app/services/makeability.server.ts";
import type { Route } from "./+types/makeability.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Can it be made · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Can it be made") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "makeability:read");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const shop = orNotFound(await findShop(tx));
    const seesPrice = can(viewer.roles, "makeability:price");
    const model = await definingModel(tx, place.revision.id);
    const replies = (await listReplies(tx, place.revision.id)).map(({ priceMinor, ...reply }) => ({
      ...reply,
      ofThisModel: reply.modelSha256 === model?.sha256,
      price: seesPrice && priceMinor !== null ? formatMoney(priceMinor, shop.currency) : null,
    }));
    return { place, questions: await listQuestions(tx), replies, model, currency: shop.currency, seesPrice, answers: can(viewer.roles, "makeability:answer"), records: can(viewer.roles, "makeability:record") };
  });
}

/** The machinist answers, the shop records what a machinist said elsewhere, or an objection is settled. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const revisionId = idParam(params.revisionId);
  const here = href("/revisions/:revisionId/makeability", { revisionId });
  const text = (name: string) => String(formData.get(name) ?? "").trim().slice(0, 2000);
  const values = Object.fromEntries(formData) as Record<string, string>;
  const errors: Record<string, string[]> = {};

  if (intent === "settle") {
    const viewer = requireCan(context, "makeability:record");
    if (!text("how")) return data({ intent: `settle ${text("answerId")}`, errors: { how: ["Say how it was settled"] } as Record<string, string[]>, values }, { status: 400 });
    const settled = await settleObjection(viewer, revisionId, idParam(text("answerId")), text("how"));
    if (!settled.ok) return data({ intent: `settle ${text("answerId")}`, errors: { form: [settled.reason === "sealed" ? "This revision was released." : "It was settled already."] } as Record<string, string[]>, values }, { status: 409 });
    return redirect(here);
  }
  const recording = intent === "record";
  const viewer = requireCan(context, recording ? "makeability:record" : "makeability:answer");
  const { currency, questions } = await inShop(viewer, async (tx) => ({ currency: orNotFound(await findShop(tx)).currency, questions: await listQuestions(tx) }));
  const answers = questions.map(({ id }) => ({ questionId: id, stance: formData.get(`stance-${id}`) === "agree" ? ("agree" as const) : ("object" as const), text: text(`text-${id}`) }));
  for (const { questionId, stance, text: why } of answers) {
    if (!formData.get(`stance-${questionId}`)) errors[`stance-${questionId}`] = ["Answer it"];
    else if (stance === "object" && !why) errors[`text-${questionId}`] = ["Say what stands in the way"];
  }
  const priceMinor = text("price") ? parseMoney(text("price"), currency) : null;
  if (text("price") && priceMinor === null) errors.price = ["Give an amount such as 480 or 480.50"];
  if (text("readyOn") && !/^\d{4}-\d\d-\d\d$/.test(text("readyOn"))) errors.readyOn = ["Give a day as year-month-day"];
  if (recording && !text("name")) errors.name = ["Say who answered"];
  if (Object.keys(errors).length > 0) return data({ intent, errors, values }, { status: 400 });
  const saved = await answerMakeability(viewer, revisionId, {
    modelSha256: text("modelSha256"),
    priceMinor: can(viewer.roles, "makeability:price") ? priceMinor : null,
    readyOn: text("readyOn") || null,
    remark: text("remark"),
    answers,
    recorded: recording ? { name: text("name"), how: text("how") || "call" } : null,
  });
  if (saved.ok) return redirect(here);
  const why = saved.reason === "sealed" ? "This revision was released meanwhile." : "The model changed while you were writing. Look at it again, then answer.";
  return data({ intent, errors: { form: [why] } as Record<string, string[]>, values }, { status: 409 });
}

export default function MakeabilityPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, questions, replies, model } = loaderData;
  useLive(place.job.id);
  const open = replies.flatMap(({ answers }) => answers.filter(({ stance, closedAt }) => stance === "object" && !closedAt)).length;
  const title = replies.length === 0 ? "Can it be made, for how much, by when?" : open > 0 ? `${open === 1 ? "One objection is" : `${open} objections are`} open` : "It can be made";
  const of = (intent: string) => (actionData?.intent === intent ? { errors: actionData.errors, values: actionData.values } : {});
  const form = (intent: "answer" | "record") => (
    <EntryForm intent={intent} {...of(intent)} labels={{ price: "Price", readyOn: "Ready on", name: "Who answered" }}>
      <input type="hidden" name="modelSha256" value={model?.sha256} />
      {intent === "record" && (
        <FieldGroup columns={2}>
          <TextField name="name" label="Who answered" />
          <SelectField name="how" label="How it came" options={["call", "text message", "e-mail", "in person"].map((value) => ({ value, label: value }))} />
        </FieldGroup>
      )}
      <FieldGroup legend="Questions">
        {questions.map(({ id, question }) => (
          <div key={id} className="grid grid-cols-1 sm:grid-cols-2">
            <RadioRow name={`stance-${id}`} label={question} options={[{ value: "agree", label: "Yes" }, { value: "object", label: "I object" }]} />
            <TextField name={`text-${id}`} label="Remark, or what stands in the way" optional />
          </div>
        ))}
      </FieldGroup>
      <FieldGroup columns={2}>
        {loaderData.seesPrice && <TextField name="price" label={`Price, ${loaderData.currency}`} optional inputMode="decimal" />}
        <DateField name="readyOn" label="Ready on" optional />
        <TextArea name="remark" label="Remark" optional rows={2} wide />
      </FieldGroup>
      <SubmitButton pendingText="Sending">{intent === "answer" ? "Send the answer" : "Record the answer"}</SubmitButton>
    </EntryForm>
  );
  return (
    <Sheet>
      <SheetHeading title={title} lead="The answers hold for the model that was looked at; another model asks again." />
      {!model && <Notice kind="info">There is no STEP yet to answer for.</Notice>}
      {model && !place.revision.sealed && questions.length > 0 && loaderData.answers && form("answer")}
      {replies.map((reply) => (
        <Section key={reply.id} title={reply.byName} ruled>
          <p className="text-soft">
            <Day at={reply.at} time />
            {reply.recordedHow && `, recorded by the shop from a ${reply.recordedHow}`}
            {!reply.ofThisModel && ", of another model"}
            {reply.price && `. Price ${reply.price}`}
            {reply.readyOn && <>, ready <Day at={reply.readyOn} /></>}
            {reply.remark && `. ${reply.remark}`}
          </p>
          <ul className="divide-y divide-hairline">
            {reply.answers.map((answer) => (
              <li key={answer.id} className="py-2">
                <p>
                  {questions.find(({ id }) => id === answer.questionId)?.question ?? "A question of before"}{" "}
                  <GateMark state={answer.stance === "agree" ? "met" : answer.closedAt ? "conceded" : "failed"} word={answer.stance === "agree" ? "yes" : answer.closedAt ? "settled" : "objects"} />
                </p>
                {answer.text && <p className="text-soft">{answer.text}</p>}
                {answer.closedAt && <p className="text-soft">Settled by {answer.closedByName}: {answer.closedHow}</p>}
                {answer.stance === "object" && !answer.closedAt && loaderData.records && !place.revision.sealed && (
                  <EntryForm intent="settle" {...of(`settle ${answer.id}`)} labels={{ how: "How it was settled" }}>
                    <input type="hidden" name="answerId" value={answer.id} />
                    <FieldGroup>
                      <TextField name="how" label="How it was settled" />
                    </FieldGroup>
                    <SubmitButton weight="secondary">Close the objection</SubmitButton>
                  </EntryForm>
                )}
              </li>
            ))}
          </ul>
        </Section>
      ))}
      {model && !place.revision.sealed && questions.length > 0 && loaderData.records && (
        <details className="mt-8 border-t-[1.5px] border-ink pt-4" open={actionData?.intent === "record"}>
          <summary className="min-h-11 text-lg font-semibold">Record what a machinist said by text or call</summary>
          {form("record")}
        </details>
      )}
      {questions.length === 0 && (
        <Notice kind="info" action={loaderData.records ? <LinkButton to={href("/shop/questions")}>Put questions</LinkButton> : undefined}>
          The shop asks no makeability questions yet.
        </Notice>
      )}
    </Sheet>
  );
}
