import { data, href, redirect } from "react-router";
import { z } from "zod";
import { CautionLine } from "#app/components/caution.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { TextArea } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findPacket, findRecall, listAcknowledgements, listCorrections, listFetches } from "#app/data/packets.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { acknowledge, correctPacket, findRelease, recallPacket } from "#app/services/packets.server.ts";
import type { Route } from "./+types/packet.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Packet ${loaderData?.part.name} ${loaderData?.letter} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place, letter }) => revisionCrumbs(place, `Packet ${letter}`) };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "packet:read");
  const id = idParam(params.decisionId);
  return inShop(viewer, async (tx) => {
    const decision = await findRelease(tx, id);
    const { part, revision, files, signatures } = decision.manifest!;
    const acknowledgements = await listAcknowledgements(tx, id);
    const corrections = await listCorrections(tx, id);
    const recall = await findRecall(tx, id);
    const mine = acknowledgements.filter((one) => (viewer.personId ? one.byPersonId === viewer.personId : one.byGuestLinkId === viewer.guestLinkId));
    const packet = await findPacket(tx, id);
    const shopSide = can(viewer.roles, "gate:read");
    return {
      id,
      place: await loadRevisionPlace(tx, decision.revisionId),
      part,
      letter: revision.letter,
      decision: decision.decision,
      decidedAt: decision.at,
      conceded: decision.lines.filter(({ state }) => state === "conceded").flatMap(({ line }) => line),
      concessions: decision.records.concessions.filter(({ id: one }) => decision.lines.some(({ state, by }) => state === "conceded" && by.includes(one))).map(({ reason, limit, lines }) => ({ reason, limit, lines })),
      signatures: signatures.map(({ name, at, part: does }) => ({ name, at, does })),
      files: files.map(({ path, bytes, sha256 }) => ({ path, bytes, sha256 })),
      packet: packet ? { state: packet.state, sha256: packet.sha256, bytes: packet.bytes, attempts: packet.attempts, error: shopSide ? packet.lastError : null } : null,
      acknowledged: mine.some(({ correctionId, recallId }) => !correctionId && !recallId),
      openCount: corrections.filter(({ id: one }) => !mine.some(({ correctionId }) => correctionId === one)).length + (recall && !mine.some(({ recallId }) => recallId === recall.id) ? 1 : 0),
      corrections,
      recall: recall ? { reason: recall.reason, by: recall.byName, at: recall.at } : null,
      // Who else has the packet is the shop's business.
      trail: shopSide ? { fetches: await listFetches(tx, id), acknowledgements: acknowledgements.map(({ byName, at, correctionId, recallId }) => ({ byName, at, of: correctionId ? "a correction" : recallId ? "the recall" : "the packet" })) } : null,
      mayAcknowledge: can(viewer.roles, "packet:acknowledge"),
      mayCorrect: can(viewer.roles, "packet:correct"),
    };
  });
}

const correctionForm = z.object({ text: words("Say what is wrong and what is right", 4000) });
const recallForm = z.object({ reason: words("Say why", 4000) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const id = idParam(params.decisionId);
  const here = href("/packets/:decisionId", { decisionId: id });
  if (intent === "acknowledge") {
    await acknowledge(requireCan(context, "packet:acknowledge"), id);
    return redirect(here);
  }
  if (intent === "correct") {
    const viewer = requireCan(context, "packet:correct");
    const form = parseForm(correctionForm, formData);
    if (!form.ok) return data({ intent, errors: form.errors, values: form.values }, { status: 400 });
    await correctPacket(viewer, id, form.value.text);
    return redirect(here);
  }
  const viewer = requireCan(context, "packet:recall");
  const form = parseForm(recallForm, formData);
  if (!form.ok) return data({ intent, errors: form.errors, values: form.values }, { status: 400 });
  const { ok } = await recallPacket(viewer, id, form.value.reason);
  if (!ok) return data({ intent, errors: { form: ["It was recalled already."] }, values: form.value as Record<string, string> }, { status: 409 });
  return redirect(here);
}

export default function PacketPage({ loaderData, actionData }: Route.ComponentProps) {
  const { id, part, letter, packet, recall, corrections, trail, place } = loaderData;
  useLive(place.job.id);
  const of = (intent: string) => (actionData?.intent === intent ? { errors: actionData.errors, values: actionData.values } : {});
  return (
    <Sheet
      rightLabel="Packet"
      right={
        <>
          <Section title={packet?.state === "ready" ? "The packet" : "The packet is being made"}>
            {packet?.state === "ready" ? (
              <>
                <LinkButton to={href("/packets/:decisionId/download", { decisionId: id })} weight="primary" download wide>
                  Fetch the packet
                </LinkButton>
                <p className="my-3">
                  <LinkButton to={`${href("/packets/:decisionId/download", { decisionId: id })}?what=sheet`} download wide>
                    Release sheet, PDF
                  </LinkButton>
                </p>
                <p className="text-soft">Unpack it and run sha256sum -c SHA256SUMS: every file says OK, or it is not what was released.</p>
              </>
            ) : (
              <>
                <ProgressLine label="Being made" share={null} text={packet && packet.attempts > 0 ? `tried ${packet.attempts} times, trying again` : "a few seconds"} />
                {packet?.error && <p className="text-failed">{packet.error}</p>}
              </>
            )}
          </Section>
          {loaderData.mayAcknowledge && (
            <Section title="Received" ruled>
              {loaderData.acknowledged && loaderData.openCount === 0 ? (
                <p className="text-soft">You acknowledged it.</p>
              ) : (
                <EntryForm intent="acknowledge">
                  <p className="mb-3">{loaderData.acknowledged ? "There is something new to acknowledge." : "Say that you have it, and cut exactly this."}</p>
                  <SubmitButton bench wide>
                    {loaderData.acknowledged ? "I have read it" : "I have received it"}
                  </SubmitButton>
                </EntryForm>
              )}
            </Section>
          )}
          {loaderData.mayCorrect && (
            <Section title="If something is wrong" ruled>
              <EntryForm intent="correct" {...of("correct")} labels={{ text: "Correction" }}>
                <FieldGroup>
                  <TextArea name="text" label="Correction" rows={3} hint="Sent to everyone who has the packet. The record itself stays as it was." />
                </FieldGroup>
                <SubmitButton weight="secondary">Add the correction</SubmitButton>
              </EntryForm>
              {!recall && (
                <div className="mt-5">
                  <Confirm trigger="Recall it" weight="quiet" title={`Recall ${part.name} ${letter}?`} text="Everyone who fetched it is told to stop. This can't be undone; the next revision takes its place." confirmText="Recall it" intent="recall" {...of("recall")}>
                    <FieldGroup>
                      <TextArea name="reason" label="Why" rows={3} />
                    </FieldGroup>
                  </Confirm>
                </div>
              )}
            </Section>
          )}
        </>
      }
    >
      <SheetHeading title={`${part.name} ${letter}, ${loaderData.decision}`} lead={<>{part.number}, {part.quantity} {part.quantity === 1 ? "piece" : "pieces"}, released <Day at={loaderData.decidedAt} time />.</>} />
      {recall && (
        <Notice kind="error">
          <b>Recalled. Cut nothing more from it.</b> {recall.reason} ({recall.by}, <Day at={recall.at} time />)
        </Notice>
      )}
      {corrections.map((one) => (
        <Notice key={one.id} kind="info">
          <b>Correction:</b> {one.text} ({one.byName}, <Day at={one.at} time />)
        </Notice>
      ))}
      {loaderData.concessions.length > 0 && (
        <Section title="Conceded">
          <Facts align="left" facts={loaderData.concessions.map(({ lines, reason, limit }, i) => ({ key: String(i), label: lines.join(", "), value: `${reason}; limited to ${[limit.pieces === null ? "" : `${limit.pieces} pieces`, limit.until ? `until ${limit.until}` : ""].filter(Boolean).join(", ")}` }))} />
        </Section>
      )}
      <Section title="Signed">
        <Facts align="left" facts={loaderData.signatures.map(({ name, at, does }, i) => ({ key: String(i), label: does, value: <>{name}, <Day at={at} time /></> }))} />
      </Section>
      <Section title="What is in it">
        <div className="overflow-x-auto">
          <table className="w-full text-left">
            <thead className="font-label text-label text-soft">
              <tr className="border-b border-rule">
                <th scope="col" className="py-1 pr-4 font-medium">File</th>
                <th scope="col" className="py-1 pr-4 text-right font-medium">Bytes</th>
                <th scope="col" className="py-1 font-medium">SHA-256</th>
              </tr>
            </thead>
            <tbody>
              {loaderData.files.map(({ path, bytes, sha256 }) => (
                <tr key={path} className="border-b border-hairline">
                  <td className="py-2 pr-4">{path}</td>
                  <td className="py-2 pr-4 text-right">{bytes.toLocaleString("en")}</td>
                  <td className="py-2 font-label text-label break-all">{sha256}</td>
                </tr>
              ))}
            </tbody>
          </table>
        </div>
        <p className="mt-2 text-soft">With them: the release sheet, the gate snapshot, the manifest and SHA256SUMS.</p>
      </Section>
      {trail && (trail.fetches.length > 0 || trail.acknowledgements.length > 0) && (
        <Section title="Who has it">
          <Facts
            facts={[
              ...trail.fetches.map(({ byName, at }, i) => ({ key: `f${i}`, label: `${byName} fetched it`, value: <Day at={at} time /> })),
              ...trail.acknowledgements.map(({ byName, at, of: what }, i) => ({ key: `a${i}`, label: `${byName} acknowledged ${what}`, value: <Day at={at} time /> })),
            ]}
          />
        </Section>
      )}
      <CautionLine />
    </Sheet>
  );
}
