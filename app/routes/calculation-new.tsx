import { data, href, Link, redirect, useSearchParams } from "react-router";
import { CalculationEntries } from "#app/components/calculation-entries.tsx";
import { CalculationResultView } from "#app/components/calculation-result.tsx";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findStoredCalculation } from "#app/data/calculations.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { entriesOf, entryText, readEntries } from "#app/engineering/entries.ts";
import { calculations, findCalculation, runCalculation } from "#app/engineering/registry.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { attachCalculation } from "#app/services/calculations.server.ts";
import type { Route } from "./+types/calculation-new.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Calculation · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Calculation") };

/** `?kind=…` picks the calculation; its inputs may stand in the address too, so that it can be sent to a colleague. */
export async function loader({ request, params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "calculation:write");
  const { searchParams } = new URL(request.url);
  const calculation = findCalculation(searchParams.get("kind") ?? "");
  const from = searchParams.get("from");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const before = from ? await findStoredCalculation(tx, idParam(from)) : undefined;
    const given = before ? Object.fromEntries(Object.entries(before.inputs).map(([key, value]) => [key, entryText(value)])) : Object.fromEntries(searchParams);
    return {
      place,
      kinds: calculations.map(({ kind, title, question }) => ({ kind, title, question })),
      chosen: calculation ? { kind: calculation.kind, title: before?.title ?? calculation.title, question: calculation.question, entries: entriesOf(calculation.kind) } : null,
      given,
      replaces: before?.revisionId === place.revision.id ? before.id : null,
    };
  });
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "calculation:write");
  const revisionId = idParam(params.revisionId);
  const values = Object.fromEntries(await request.formData()) as Record<string, string>;
  const kind = values.kind ?? "";
  const inputs = readEntries(kind, values);
  const outcome = runCalculation(kind, inputs);
  if (!outcome.ok) return data({ errors: outcome.errors, values, result: null }, { status: 400 });
  if (values.intent === "try") return data({ errors: {} as Record<string, string[]>, values, result: outcome.result });
  const attached = await attachCalculation(viewer, revisionId, { kind, title: (values.title ?? "").trim() || findCalculation(kind)!.title, inputs, replaces: values.replaces ? idParam(values.replaces) : null });
  if (attached.ok) return redirect(href("/calculations/:calculationId", { calculationId: attached.id }));
  const errors = attached.reason === "sealed" ? { form: ["This revision was released: nothing more can be attached."] } : attached.errors;
  return data({ errors: errors as Record<string, string[]>, values, result: null }, { status: attached.reason === "sealed" ? 409 : 400 });
}

export default function CalculationNewPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, kinds, chosen } = loaderData;
  const [params] = useSearchParams();
  if (!chosen) {
    return (
      <Sheet>
        <SheetHeading title="Which calculation?" lead="It is attached to this revision and counts at the gate." />
        <ul className="divide-y divide-hairline border-y border-hairline">
          {kinds.map(({ kind, title, question }) => (
            <li key={kind}>
              <Link to={`?${new URLSearchParams({ ...Object.fromEntries(params), kind })}`} className="flex min-h-11 flex-wrap items-baseline gap-x-4 py-3">
                <span className="word">{title}</span> <span className="text-soft">{question}</span>
              </Link>
            </li>
          ))}
        </ul>
      </Sheet>
    );
  }
  return (
    <Sheet
      left={
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={Object.fromEntries(chosen.entries.map(({ key, label }) => [key, label]))}>
          <input type="hidden" name="kind" value={chosen.kind} />
          {loaderData.replaces && <input type="hidden" name="replaces" value={loaderData.replaces} />}
          <FieldGroup>
            <TextField name="title" label="For what" defaultValue={chosen.title} />
          </FieldGroup>
          <CalculationEntries entries={chosen.entries} values={loaderData.given} />
          <div className="grid gap-3">
            <SubmitButton name="intent" value="try" weight="secondary" pendingText="Computing" wide>
              Compute
            </SubmitButton>
            <SubmitButton name="intent" value="attach" pendingText="Attaching" wide disabled={place.revision.sealed}>
              Attach to revision {place.revision.ordinal}
            </SubmitButton>
          </div>
        </EntryForm>
      }
    >
      <SheetHeading title={chosen.title} lead={chosen.question} />
      {actionData?.result ? <CalculationResultView result={actionData.result} /> : <Section title="Nothing computed yet"><p className="max-w-prose text-soft">Fill in the numbers and press Compute. Every step is shown with its formula and source.</p></Section>}
    </Sheet>
  );
}
