import { data, href, redirect } from "react-router";
import { z } from "zod";
import { CautionLine } from "#app/components/caution.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { ConcessionForm, DecisionForms, ProposeForm } from "#app/components/gate-forms.tsx";
import { GateLines, GateVerdict } from "#app/components/gate-marks.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProveForm } from "#app/components/prove-form.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findOpenProposal, listConcessions, listDecisions } from "#app/data/decisions.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { gateLines } from "#app/domain/gate-records.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { dayOrNull, numberOrNull, words, wordsOrNone, wordsOrNull } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { evaluateRevision, gateViews, missingView } from "#app/services/gate.server.ts";
import { concedeLines, proposeRevision, provedLately, refuseRevision, releaseRevision, takeBackConcession, withdrawFromGate, type GateRefusal } from "#app/services/release.server.ts";
import type { Route } from "./+types/gate.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Gate: ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Gate") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "gate:read");
  const mayDecide = can(viewer.roles, "gate:decide");
  return inShop(viewer, async (tx) => {
    const revisionId = idParam(params.revisionId);
    const place = await loadRevisionPlace(tx, revisionId);
    const evaluated = orNotFound(await evaluateRevision(tx, revisionId));
    const { result, records } = evaluated;
    const proposal = await findOpenProposal(tx, revisionId);
    return {
      place,
      verdict: result.verdict,
      ruleVersion: result.ruleVersion,
      lines: gateViews(viewer, evaluated),
      blocked: result.blocked.map((missing) => missingView(viewer, records, missing)),
      concedable: result.lines.filter(({ state, missing }) => (state === "open" || state === "failed") && missing.every(({ concedable }) => concedable !== "no")).map(({ line }) => line),
      needsOutside: result.lines.some(({ missing }) => missing.some(({ concedable }) => concedable === "with-outside-approval")),
      concessions: await listConcessions(tx, revisionId),
      proposal: proposal ? { by: proposal.byName, at: proposal.at, mine: proposal.byPersonId === viewer.personId } : null,
      decisions: (await listDecisions(tx, revisionId)).map(({ id, decision, reason, letter, byName, at, samePerson }) => ({ id, decision, reason, letter, byName, at, samePerson })),
      // The decision is on what this page shows: it goes back with the form and is compared.
      seen: mayDecide && !place.revision.sealed ? { hash: result.recordsHash, records: JSON.stringify(records) } : null,
      mayDecide,
      proved: provedLately(viewer),
      mayPropose: can(viewer.roles, "gate:propose"),
    };
  });
}

const releaseForm = z.object({ hash: z.string().length(64), records: z.string().max(5_000_000), reason: wordsOrNone() });
const refusalForm = z.object({ reason: words("Say why it is a no-go", 2000) });
const concessionForm = z
  .object({
    lines: z.array(z.enum(gateLines)).min(1, "Pick the lines you concede"),
    reason: words("Say why", 2000),
    limitPieces: numberOrNull({ min: 1, max: 10_000, whole: true }),
    limitUntil: dayOrNull,
    outsideName: wordsOrNull(),
    outsideOrganisation: wordsOrNull(),
    outsideReference: wordsOrNull(),
    outsideOn: dayOrNull,
  })
  .superRefine((value, context) => {
    if (value.limitPieces === null && value.limitUntil === null) context.addIssue({ code: "custom", path: ["limitPieces"], message: "Limit it: to pieces, or until a day" });
    const outside = [value.outsideName, value.outsideOrganisation, value.outsideReference, value.outsideOn];
    if (outside.some(Boolean) && !outside.every(Boolean)) context.addIssue({ code: "custom", path: ["outsideName"], message: "An outside approval needs name, organisation, reference and day" });
  });

const proposableBy = { propose: "gate:propose", withdraw: "gate:propose" } as const;

export async function action({ request, params, context }: Route.ActionArgs) {
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const viewer = requireCan(context, intent in proposableBy ? "gate:propose" : "gate:decide");
  const revisionId = idParam(params.revisionId);
  const here = href("/revisions/:revisionId/gate", { revisionId });
  switch (intent) {
    case "propose":
      return answer(intent, await proposeRevision(viewer, revisionId), here);
    case "withdraw":
      return answer(intent, await withdrawFromGate(viewer, revisionId), here);
    case "take-back":
      return answer(intent, await takeBackConcession(viewer, revisionId, idParam(String(formData.get("concessionId")))), here);
    case "concede": {
      const form = parseForm(concessionForm, formData);
      if (!form.ok) return data({ intent, errors: form.errors, values: form.values, refusal: null }, { status: 400 });
      const { lines, reason, limitPieces, limitUntil, outsideName, outsideOrganisation, outsideReference, outsideOn } = form.value;
      const outsideApproval = outsideName && outsideOrganisation && outsideReference && outsideOn ? { name: outsideName, organisation: outsideOrganisation, reference: outsideReference, on: outsideOn } : null;
      return answer(intent, await concedeLines(viewer, revisionId, { lines, reason, limitPieces, limitUntil, outsideApproval }), here);
    }
    case "no-go": {
      const form = parseForm(refusalForm, formData);
      if (!form.ok) return data({ intent, errors: form.errors, values: form.values, refusal: null }, { status: 400 });
      return answer(intent, await refuseRevision(viewer, revisionId, form.value.reason), here);
    }
    case "go": {
      const form = parseForm(releaseForm, formData);
      if (!form.ok) return data({ intent, errors: { form: ["Load the page again"] }, values: {}, refusal: null }, { status: 400 });
      const released = await releaseRevision(viewer, revisionId, { hash: form.value.hash, records: parseJson(form.value.records), reason: form.value.reason });
      return released.ok ? redirect(href("/packets/:decisionId", { decisionId: released.decisionId })) : answer(intent, released, here);
    }
    default:
      throw new Response("Not found", { status: 404 });
  }
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (fault) {
    if (fault instanceof SyntaxError) return null;
    throw fault;
  }
}

function answer(intent: string, result: { ok: true } | GateRefusal, here: string) {
  if (result.ok) return redirect(here);
  return data({ intent, errors: {}, values: {} as Record<string, string>, refusal: refusalWords(result) }, { status: 409 });
}

function refusalWords(refusal: GateRefusal): { title: string; list: string[]; prove: boolean } {
  switch (refusal.reason) {
    case "prove":
      return { title: "A signature needs you to sign in again, within the last five minutes. Nothing was decided.", list: [], prove: true };
    case "released":
      return { title: "This revision was released meanwhile. Nothing more was decided.", list: [], prove: false };
    case "not-proposable":
      return { title: "It can't be put to the gate yet.", list: refusal.missing, prove: false };
    case "not-clear":
      return { title: "Nothing was released: these are not met.", list: refusal.missing.map(({ what, who }) => `${what} (${who})`), prove: false };
    case "changed":
      return { title: "Nothing was released: the records changed while you were looking. Read them again below.", list: refusal.changes, prove: false };
  }
}

export default function GatePage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, proposal, concessions, decisions, seen, proved } = loaderData;
  const { revision, part } = place;
  const released = decisions.find(({ letter }) => letter !== null);
  const errorsOf = (intent: string) => (actionData?.intent === intent ? { errors: actionData.errors, values: actionData.values } : {});
  return (
    <Sheet
      rightLabel="Decision"
      right={
        <>
          {released ? (
            <Section title={`Released as ${released.letter}`}>
              <p className="mb-3 text-soft">
                By {released.byName}, <Day at={released.at} time />
                {released.samePerson ? "; proposed and decided by the same person" : ""}. The records are sealed.
              </p>
              <LinkButton to={href("/packets/:decisionId", { decisionId: released.id })} weight="primary" wide>
                Open the packet
              </LinkButton>
            </Section>
          ) : (
            <>
              <ProposeForm proposal={proposal} mayPropose={loaderData.mayPropose} proved={proved} />
              {loaderData.mayDecide && seen && <DecisionForms verdict={loaderData.verdict} seen={seen} proved={proved} proposed={proposal !== null} alone={proposal === null || proposal.mine} refusal={errorsOf("no-go")} go={errorsOf("go")} />}
            </>
          )}
          {decisions.some(({ letter }) => letter === null) && (
            <Section title="Earlier decisions" ruled>
              <Facts facts={decisions.filter(({ letter }) => letter === null).map(({ id, byName, reason, at }) => ({ key: id, label: `No-go, ${byName}`, value: <>{reason} (<Day at={at} />)</> }))} align="left" />
            </Section>
          )}
        </>
      }
    >
      <SheetHeading title={`${part.name} ${revision.ordinal} at the gate`} lead={proposal ? <>Put there by {proposal.by}, <Day at={proposal.at} time />.</> : revision.sealed ? undefined : "Not put to the gate yet."} />
      {actionData?.refusal && (
        <Notice kind="error">
          <p className="font-semibold">{actionData.refusal.title}</p>
          {actionData.refusal.list.length > 0 && (
            <ul className="list-disc pl-5">
              {actionData.refusal.list.map((what) => (
                <li key={what}>{what}</li>
              ))}
            </ul>
          )}
        </Notice>
      )}
      {!revision.sealed && !proved && (loaderData.mayDecide || loaderData.mayPropose) && <ProveForm returnTo={href("/revisions/:revisionId/gate", { revisionId: revision.id })} />}
      <GateVerdict verdict={loaderData.verdict} lines={loaderData.lines} blocked={loaderData.blocked} />
      <GateLines lines={loaderData.lines} />
      <CautionLine />
      {concessions.length > 0 && (
        <Section title="Concessions" ruled>
          <Facts
            align="left"
            facts={concessions.map((one) => ({
              key: one.id,
              label: one.lines.join(", "),
              value: (
                <>
                  {one.reason}, limited to {[one.limitPieces === null ? "" : `${one.limitPieces} pieces`, one.limitUntil === null ? "" : `until ${one.limitUntil}`].filter(Boolean).join(", ")}. {one.byName}, <Day at={one.at} />.
                </>
              ),
            }))}
          />
        </Section>
      )}
      {loaderData.mayDecide && !revision.sealed && loaderData.concedable.length > 0 && (
        <ConcessionForm lines={loaderData.concedable} needsOutside={loaderData.needsOutside} proved={proved} {...errorsOf("concede")} />
      )}
    </Sheet>
  );
}
