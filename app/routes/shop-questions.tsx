import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { TextArea } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { Section, SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { listShopQuestions, type ShopQuestion } from "#app/data/questions.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken } from "#app/http/refusals.server.ts";
import { moveQuestion, saveQuestion } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-questions.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Questions to the machinist · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Questions" }] };

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const withSetAside = new URL(request.url).searchParams.get("aside") === "1";
  return { questions: await inShop(viewer, (tx) => listShopQuestions(tx, { withSetAside })), mayWrite: can(viewer.roles, "equipment:write"), owner: can(viewer.roles, "shop:manage") };
}

const questionForm = z.object({ question: words("Write the question", 300) });

export async function action({ request, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const form = await request.formData();
  const intent = form.get("intent");
  if (intent === "earlier" || intent === "later") {
    await inShop(viewer, (tx) => moveQuestion(tx, viewer, idParam(String(form.get("id"))), intent === "earlier" ? -1 : 1));
    return redirect(href("/shop/questions"));
  }
  const read = parseForm(questionForm, form);
  if (!read.ok) return mistaken(read);
  await inShop(viewer, (tx) => saveQuestion(tx, viewer, null, read.value.question));
  return redirect(href("/shop/questions"));
}

export default function ShopQuestionsPage({ loaderData, actionData }: Route.ComponentProps) {
  const { questions, mayWrite, owner } = loaderData;
  const asked = questions.filter(({ setAside }) => !setAside);
  const columns: Column<ShopQuestion>[] = [
    { key: "question", label: "Question", cell: (row) => (row.setAside ? `${row.question} (set aside)` : row.question) },
    { key: "answers", label: "Answers", align: "number", cell: (row) => row.answers },
    ...(mayWrite && asked.length > 1 ? [{ key: "order", label: "Order", cell: (row: ShopQuestion) => <Order row={row} asked={asked} /> }] : []),
  ];
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="Questions to the machinist" lead="Asked of every revision, in this order, before metal is paid for. Each is answered by agreeing or objecting." />
      <DataTable
        caption="Questions to the machinist"
        captionHidden
        columns={columns}
        rows={questions}
        rowKey={(row) => row.id}
        rowHref={mayWrite ? (row) => href("/shop/questions/:questionId", { questionId: row.id }) : undefined}
        filters={<AsideFilter />}
        csvHref={href("/shop/questions.csv")}
        empty={{ text: "No questions. The gate then has nothing that the machinist must answer, and stays open at that line." }}
      />
      {mayWrite && (
        <Section title="Another question">
          <EntryForm key={questions.length} errors={actionData?.errors} values={actionData?.values} intent="add" className="max-w-3xl">
            <FieldGroup>
              <TextArea name="question" label="Question" rows={2} hint="Asked so that agreeing is good." />
            </FieldGroup>
            <SubmitButton pendingText="Adding">Add the question</SubmitButton>
          </EntryForm>
        </Section>
      )}
    </ShopSheet>
  );
}

function Order({ row, asked }: { row: ShopQuestion; asked: ShopQuestion[] }) {
  const at = asked.indexOf(row);
  const move = (intent: "earlier" | "later") => (
    <EntryForm intent={intent} preventScrollReset>
      <input type="hidden" name="id" value={row.id} />
      <SubmitButton weight="quiet" pendingText="Moving">
        {intent === "earlier" ? "Up" : "Down"}
        <span className="sr-only">: {row.question}</span>
      </SubmitButton>
    </EntryForm>
  );
  return at < 0 ? null : (
    <span className="relative z-10 inline-flex gap-4">
      {at > 0 && move("earlier")}
      {at < asked.length - 1 && move("later")}
    </span>
  );
}
