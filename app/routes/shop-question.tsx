import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideForm } from "#app/components/aside-form.tsx";
import { TextArea } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { findShopQuestion } from "#app/data/questions.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { rowVersion, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken, overtaken } from "#app/http/refusals.server.ts";
import { putEquipmentAside, saveQuestion } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-question.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Question · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Questions", to: href("/shop/questions") }, { label: "Change" }] };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:write");
  const question = orNotFound(await inShop(viewer, (tx) => findShopQuestion(tx, idParam(params.questionId))));
  return { question, owner: can(viewer.roles, "shop:manage") };
}

const questionForm = z.object({ question: words("Write the question", 300), rowVersion });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const id = idParam(params.questionId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (intent === "set-aside" || intent === "take-up") {
    await inShop(viewer, (tx) => putEquipmentAside(tx, viewer, "makeability_questions", id, intent === "set-aside"));
    return redirect(href("/shop/questions"));
  }
  const read = parseForm(questionForm, form);
  if (!read.ok) return mistaken(read);
  const { question, rowVersion: version } = read.value;
  const saved = await inShop(viewer, (tx) => saveQuestion(tx, viewer, { id, rowVersion: version }, question));
  if (saved.ok) return redirect(href("/shop/questions"));
  const { current } = saved;
  return overtaken(form, { labels: { question: "Question" }, yours: { question }, theirs: { question: current.question }, rowVersion: current.rowVersion });
}

export default function ShopQuestionPage({ loaderData, actionData }: Route.ComponentProps) {
  const { question, owner } = loaderData;
  const answered = question.answers === 0 ? undefined : "Machinists have answered it. Other words become a question of their own in its place; the answers stay with these.";
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="A question to the machinist" lead={question.setAside ? "Set aside: not asked any more." : answered} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} intent="save">
          <RowVersion value={actionData?.rowVersion ?? question.rowVersion} />
          <FieldGroup>
            <TextArea name="question" label="Question" rows={2} defaultValue={question.question} />
          </FieldGroup>
          <SubmitButton>Save</SubmitButton>
        </EntryForm>
        <AsideForm setAside={question.setAside} />
      </div>
    </ShopSheet>
  );
}
