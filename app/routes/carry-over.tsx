import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { Confirm } from "#app/components/confirm.tsx";
import { Day } from "#app/components/day.tsx";
import { Empty } from "#app/components/empty.tsx";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";
import { useLive } from "#app/components/live.tsx";
import { Length, useUnits } from "#app/components/measure.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findRevision } from "#app/data/revisions.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { judgeOnPrint, verdictWords } from "#app/domain/fit.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosen, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { carrySameModel, declareUnchanged, loadCarryOverState, withdrawCarryOver, type CarryOverResult } from "#app/services/carry-overs.server.ts";
import type { Route } from "./+types/carry-over.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Carry-over: ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Carry-over") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "fit-check:read");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const revision = orNotFound(await findRevision(tx, place.revision.id));
    const { model, states } = await loadCarryOverState(tx, revision);
    return {
      place,
      hasParent: revision.parentId !== null,
      hasModel: model !== null,
      states: states.map(({ characteristic, evidence, carried, triedHere, sameModel }) => ({
        id: characteristic.id,
        characteristic: { name: characteristic.name, kind: characteristic.kind, lowerMm: characteristic.lowerMm, upperMm: characteristic.upperMm, printLowerMm: characteristic.printLowerMm, printUpperMm: characteristic.printUpperMm, places: characteristic.places, critical: characteristic.critical },
        evidence,
        // Another model has come since: what was said of the old one does not stand for it.
        carried: carried && { ...carried, stale: carried.modelSha256 !== model?.sha256 },
        triedHere,
        sameModel,
        photoMissing: characteristic.photoRequired && evidence !== null && evidence.photos === 0,
        judgement: evidence && judgeOnPrint(characteristic, { readingsMm: evidence.readingsMm, answers: evidence.answers, uncertaintyMm: null }),
      })),
      mayRecord: can(viewer.roles, "fit-check:record") && !place.revision.sealed,
    };
  });
}

const declareForm = z.object({ characteristicId: chosen("Pick the characteristic"), reason: words("Say why it is unchanged", 500) });
const withdrawForm = z.object({ carryOverId: z.uuid("Load the page again") });

const refusals: Record<Extract<CarryOverResult, { ok: false }>["reason"], string> = {
  sealed: "This revision was released and is sealed: what its decision rests on can't change.",
  "no-model": "This revision has no stored STEP yet. Upload it first: evidence is carried over to a model.",
  "no-evidence": "No earlier revision has a result of it that counts.",
  "other-model": "The earlier revision has no stored STEP any more, so that nothing can be compared with it.",
  "there-already": "It is carried over already. Withdraw that first.",
};

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "fit-check:record");
  const revisionId = idParam(params.revisionId);
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const of = String(formData.get("characteristicId") ?? formData.get("carryOverId") ?? "");
  const answer = (result: CarryOverResult) =>
    result.ok ? redirect(href("/revisions/:revisionId/carry-over", { revisionId })) : data({ intent, of, errors: { form: [refusals[result.reason]] } as Record<string, string[]>, values: {} as Record<string, string> }, { status: 409 });
  if (intent === "same-model") return answer(await carrySameModel(viewer, revisionId));
  const form = intent === "withdraw" ? parseForm(withdrawForm, formData) : parseForm(declareForm, formData);
  if (!form.ok) return data({ intent, of, errors: form.errors, values: form.values }, { status: 400 });
  if ("carryOverId" in form.value) return answer(await withdrawCarryOver(viewer, revisionId, form.value.carryOverId));
  return answer(await declareUnchanged(viewer, revisionId, form.value.characteristicId, form.value.reason));
}

type State = Route.ComponentProps["loaderData"]["states"][number];

export default function CarryOverPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, states, hasParent, hasModel, mayRecord } = loaderData;
  useLive(place.job.id);
  const standing = states.filter(({ sameModel, triedHere, carried }) => sameModel && !triedHere && !carried);
  const faults = (intent: string, of = "") => (actionData?.intent === intent && actionData.of === of ? { errors: actionData.errors, values: actionData.values } : {});
  return (
    <Sheet>
      <SheetHeading
        title="What still stands from before"
        lead="A characteristic whose faces did not change since it was tried need not be tried again. It is shown as carried over, never as tried."
      />
      {place.revision.sealed && <Notice kind="info">This revision was released: nothing here changes any more.</Notice>}
      {!hasParent && <Empty>This is a first revision: there is nothing before it.</Empty>}
      {hasParent && !hasModel && <Notice kind="info">This revision has no stored STEP yet. Evidence is carried over to a model, so upload it first.</Notice>}
      {hasParent && hasModel && standing.length > 0 && mayRecord && (
        <Section title={`The model file is the same as that of revision ${standing[0]!.evidence!.ordinal}`} lead={`So what was found there stands here: ${standing.map(({ characteristic }) => characteristic.name).join(", ")}.`}>
          <EntryForm intent="same-model" {...faults("same-model")}>
            <SubmitButton pendingText="Carrying over">{standing.length === 1 ? "Carry it over" : `Carry these ${standing.length} over`}</SubmitButton>
          </EntryForm>
        </Section>
      )}
      {hasParent && states.length === 0 && <Empty>The part has no required characteristic that a print could prove.</Empty>}
      {hasParent && states.length > 0 && (
        <ul className="mt-6 divide-y divide-hairline border-y border-hairline">
          {states.map((state) => (
            <li key={state.id} className="py-4">
              <One state={state} mayRecord={mayRecord && hasModel} declare={faults("declare", state.id)} withdraw={faults("withdraw", state.carried?.id)} />
            </li>
          ))}
        </ul>
      )}
    </Sheet>
  );
}

type Faults = Pick<Parameters<typeof EntryForm>[0], "errors" | "values">;

function One({ state, mayRecord, declare, withdraw }: { state: State; mayRecord: boolean; declare: Faults; withdraw: Faults }) {
  const { characteristic, evidence, carried, triedHere, judgement } = state;
  const units = useUnits();
  const verdict = judgement && verdictWords(characteristic, judgement, units);
  return (
    <>
      <div className="flex flex-wrap items-baseline justify-between gap-x-6">
        <h2 className="text-lg">{characteristic.name}</h2>
        {triedHere ? <GateMark state="met" word="tried on this revision" /> : carried ? <GateMark state="conceded" word={carried.stale ? "carried to another model" : "carried over"} /> : <GateMark state="open" word="not tried here" />}
      </div>
      {evidence && verdict ? (
        <p className="text-soft">
          <Link to={href("/fit-checks/:fitCheckId", { fitCheckId: evidence.fitCheckId })} className="word">Revision {evidence.ordinal}, print {evidence.printName}</Link> on {evidence.matingPartName}, <Day at={evidence.at} />:{" "}
          {evidence.readingsMm.map((mm, index) => (
            <span key={index}>
              <Length mm={mm} />,{" "}
            </span>
          ))}
          {verdict.words}
          {state.photoMissing && ", without the photo that is asked for"}
        </p>
      ) : (
        <p className="text-soft">{triedHere ? "" : "No earlier revision has a result of it that counts. Try it on a print."}</p>
      )}
      {carried && (
        <p>
          {carried.basis === "same-model" ? `From revision ${carried.fromOrdinal}: the model file is the same.` : `Declared unchanged since revision ${carried.fromOrdinal} by ${carried.byName}: ${carried.reason}`}{" "}
          <span className="text-soft">
            <Day at={carried.at} />
          </span>
        </p>
      )}
      {carried?.stale && <p className="text-attention">The model changed since, so this does not stand any more. Withdraw it, then declare it again if it is still true.</p>}
      {carried && triedHere && <p className="text-soft">It was tried here too, and that decides.</p>}
      {mayRecord && carried && (
        <Confirm trigger="Withdraw" weight="quiet" title="Withdraw what was carried over" text={`${characteristic.name} then has to be tried on a print of this revision, or declared again.`} confirmText="Withdraw" intent="withdraw" sends={{ carryOverId: carried.id }} {...withdraw} />
      )}
      {mayRecord && !carried && !triedHere && evidence && judgement && !state.sameModel && (
        <details open={declare.errors !== undefined}>
          <summary className="flex min-h-11 items-center font-semibold text-blue">Declare it unchanged</summary>
          {judgement.verdict !== "conforms" && <p className="mb-2 text-attention">What was found then does not hold the print limits of today, so that carrying it over proves nothing.</p>}
          <EntryForm intent="declare" {...declare} labels={{ reason: "Why" }} className="max-w-xl">
            <input type="hidden" name="characteristicId" value={state.id} />
            <FieldGroup>
              <TextField name="reason" label={`Why nothing that proves it changed since revision ${evidence.ordinal}`} hint="Only the edges were broken; the bore was not touched" maxLength={500} />
            </FieldGroup>
            <SubmitButton weight="secondary">I declare it unchanged</SubmitButton>
          </EntryForm>
        </details>
      )}
    </>
  );
}
