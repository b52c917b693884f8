import { data, href, redirect } from "react-router";
import { z } from "zod";
import { KeptFitChecks } from "#app/components/bench/kept-fit-checks.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Day } from "#app/components/day.tsx";
import { Empty } from "#app/components/empty.tsx";
import { Facts } from "#app/components/facts.tsx";
import { TextField } from "#app/components/fields.tsx";
import { FitCheckList } from "#app/components/fit-check-list.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { listRevisionFiles } from "#app/data/files.server.ts";
import { listFitChecksOfPrint } from "#app/data/fit-checks.server.ts";
import { findPrint, type Scale } from "#app/data/prints.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { inWords } from "#app/domain/numbers-in-words.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { viewFitChecks } from "#app/services/fit-views.server.ts";
import { spoilPrint } from "#app/services/prints.server.ts";
import type { Route } from "./+types/print.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Print ${loaderData?.print.name} of ${loaderData?.place.part.name} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place, print }) => revisionCrumbs(place, `Print ${print.name}`) };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "print:read");
  return inShop(viewer, async (tx) => {
    const print = orNotFound(await findPrint(tx, idParam(params.printId)));
    const place = await loadRevisionPlace(tx, print.revisionId);
    const characteristics = await listCharacteristics(tx, place.part.id, { withSetAside: true });
    const models = await listRevisionFiles(tx, print.revisionId);
    return {
      place,
      print,
      ofThisModel: models.some(({ sha256, role }) => sha256 === print.modelSha256 && (role === "stl" || role === "step")),
      proves: characteristics.filter(({ id }) => print.proves.includes(id)).map(({ name }) => name),
      checks: await viewFitChecks(tx, place.part.id, await listFitChecksOfPrint(tx, print.id)),
      mayRecord: can(viewer.roles, "print:record") && !place.revision.sealed,
      personKey: viewer.personId ?? viewer.guestLinkId ?? "",
      mayTry: can(viewer.roles, "fit-check:record") && !place.revision.sealed,
    };
  });
}

const spoilForm = z.object({ reason: words("Say why: warped, wrong material, layer shift", 300) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "print:record");
  const printId = idParam(params.printId);
  const formData = await request.formData();
  const again = formData.get("intent") === "count-again";
  const form = again ? ({ ok: true, value: { reason: null } } as const) : parseForm(spoilForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const done = await spoilPrint(viewer, printId, form.value.reason);
  if (!done.ok) return data({ errors: { form: ["This revision was released and is sealed: what its decision rests on can't change."] } as Record<string, string[]>, values: {} as Record<string, string> }, { status: 409 });
  return redirect(href("/prints/:printId", { printId }));
}

function scaleText({ x, y, z }: Scale): string {
  if (x === 1 && y === 1 && z === 1) return "as modelled";
  return x === y && y === z ? `× ${x}` : `× ${x} in X, ${y} in Y, ${z} in Z`;
}

export default function PrintPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, print, checks, proves, ofThisModel, mayRecord, mayTry } = loaderData;
  useLive(place.job.id);
  const tryIt = mayTry && !print.spoiled && (
    <LinkButton to={href("/prints/:printId/fit-checks/new", { printId: print.id })} weight="primary" bench>
      Try it on
    </LinkButton>
  );
  return (
    <Sheet
      rightLabel="About the print"
      right={
        <>
          <Section title="About the print">
            <Facts
              facts={[
                { label: "Preset", value: print.presetName },
                { label: "Sliced from", value: `${print.fileName ?? "a file"}${ofThisModel ? "" : ", replaced since"}` },
                { label: "Scale", value: scaleText(print.scale) },
                { label: "Printed", value: <Day at={print.printedOn} /> },
                { label: "Recorded by", value: print.byName },
                ...(print.whole ? [] : [{ label: "Can prove", value: inWords(proves) || "nothing" }]),
                { label: "SHA-256", value: <span className="break-all font-label text-label">{print.modelSha256.slice(0, 16)}…</span> },
              ]}
            />
            {print.note && <p className="mt-3 whitespace-pre-line">{print.note}</p>}
          </Section>
          {mayRecord && (
            <Section title={print.spoiled ? "It does not count" : "Does it count?"} ruled>
              {print.spoiled ? (
                <EntryForm intent="count-again" errors={actionData?.errors}>
                  <p className="mb-3 text-soft">Nothing that was tried on it proves anything while it is spoiled.</p>
                  <SubmitButton weight="secondary">Let it count again</SubmitButton>
                </EntryForm>
              ) : (
                <Confirm trigger="It is spoiled" title={`Print ${print.name} does not count`} text="What was tried on it is kept, and proves nothing any more. You can let it count again until the revision is released." confirmText="It does not count" intent="spoil" errors={actionData?.errors} values={actionData?.values} labels={{ reason: "Why" }}>
                  <FieldGroup>
                    <TextField name="reason" label="Why" hint="Warped, wrong material, layer shift" suggestions={["warped", "wrong material", "layer shift", "wrong scale", "support scars on the seat"]} maxLength={300} />
                  </FieldGroup>
                </Confirm>
              )}
            </Section>
          )}
        </>
      }
    >
      <SheetHeading title={`Print ${print.name}, ${print.whole ? "whole" : print.piece}`} lead={place.revision.sealed ? "Its revision was released: nothing here changes any more." : undefined} actions={tryIt || undefined} />
      <KeptFitChecks personKey={loaderData.personKey} printId={print.id} />
      {print.spoiled && <Notice kind="error">It does not count: {print.spoiled}.</Notice>}
      {!ofThisModel && !print.spoiled && <Notice kind="info">Revision {place.revision.ordinal} has another model by now, so this print proves nothing for it. Print the new model.</Notice>}
      <Section title="Tried on">
        {checks.length > 0 ? (
          <FitCheckList checks={checks} />
        ) : (
          <Empty>{print.spoiled ? "It was never tried on." : "Not tried on anything yet. Take it and a phone to the bench."}</Empty>
        )}
      </Section>
    </Sheet>
  );
}
