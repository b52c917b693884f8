import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { Empty } from "#app/components/empty.tsx";
import { RadioRow, TextArea } from "#app/components/fields.tsx";
import { FitResult } from "#app/components/fit-result.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { PhotoList, type PhotoView } from "#app/components/photo-list.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { UploadPanel } from "#app/components/upload/upload-panel.tsx";
import { listCallouts } from "#app/data/callouts.server.ts";
import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { listUploadsTo } from "#app/data/files.server.ts";
import { findFitCheck, listFitResults } from "#app/data/fit-checks.server.ts";
import { listFitPhotos } from "#app/data/photos.server.ts";
import { findPrint } from "#app/data/prints.server.ts";
import { fitCauses } from "#app/domain/fit-causes.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { causeWords, fitSentence } from "#app/domain/fit.ts";
import { can } from "#app/domain/permissions.ts";
import { env } from "#app/env.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { nameFitCause } from "#app/services/fit-checks.server.ts";
import { judgeResult } from "#app/services/fit-views.server.ts";
import type { Route } from "./+types/fit-check.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Print ${loaderData?.print.name} on ${loaderData?.check.matingPartName} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ place, print }) => [...revisionCrumbs(place, `Print ${print.name}`).slice(0, -1), { label: `Print ${print.name}`, to: href("/prints/:printId", { printId: print.id }) }, { label: "Fit check" }],
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "fit-check:read");
  return inShop(viewer, async (tx) => {
    const check = orNotFound(await findFitCheck(tx, idParam(params.fitCheckId)));
    const print = orNotFound(await findPrint(tx, check.printId));
    const place = await loadRevisionPlace(tx, check.revisionId);
    const characteristics = await listCharacteristics(tx, place.part.id, { withSetAside: true });
    const results = (await listFitResults(tx, [check.id])).map((result) => {
      const { name, kind, lowerMm, upperMm, printLowerMm, printUpperMm, places, critical, question, method, photoRequired } = characteristics.find(({ id }) => id === result.characteristicId)!;
      return {
        id: result.id,
        characteristicId: result.characteristicId,
        photoRequired,
        characteristic: { name, kind, lowerMm, upperMm, printLowerMm, printUpperMm, places, critical, question, method },
        readingsMm: result.readingsMm,
        answers: result.answers,
        judgement: judgeResult(characteristics, result),
        instrument: result.instrument === null ? null : { name: result.instrument, uncertaintyMm: result.uncertaintyMm, trust: result.trust },
        bandPositionMm: result.bandPositionMm,
        bandWidthMm: result.bandWidthMm,
      };
    });
    const photos = (await listFitPhotos(tx, check.revisionId)).filter(({ fitCheckId }) => fitCheckId === check.id);
    const callouts = await listCallouts(tx, viewer, { fileIds: photos.map(({ fileId }) => fileId) });
    const nameOf = (id: string | null) => characteristics.find((one) => one.id === id)?.name ?? "The fit check as a whole";
    return {
      place,
      print: { id: print.id, name: print.name, spoiled: print.spoiled },
      check: { id: check.id, matingPartId: check.matingPartId, matingPartName: check.matingPartName, byName: check.byName, at: check.at, cause: check.cause, remarks: check.remarks },
      results,
      ...fitSentence(results.map(({ judgement }) => judgement.verdict)),
      photos: photos.map(
        (photo): PhotoView => ({
          fileId: photo.fileId,
          name: photo.name,
          shows: nameOf(photo.characteristicId),
          ready: photo.ready,
          width: photo.width,
          height: photo.height,
          spots: callouts
            .filter(({ fileId }) => fileId === photo.fileId)
            .map(({ id, number, x, y, body, closedAt }) => ({ id, number, x: x!, y: y!, label: body, closed: closedAt !== null, href: href("/callouts/:calloutId", { calloutId: id }) })),
        }),
      ),
      photosAsked: results.filter(({ photoRequired, characteristicId }) => photoRequired && !photos.some((photo) => photo.characteristicId === characteristicId || photo.characteristicId === null)).map(({ characteristicId }) => ({ id: characteristicId, name: nameOf(characteristicId) })),
      underWay: (await listUploadsTo(tx, { to: "fit-check", id: check.id, characteristicId: null })).map(({ id, name, state, refusal }) => ({ id, name, state, refusal })),
      limits: { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB },
      mayRecord: can(viewer.roles, "fit-check:record") && !place.revision.sealed,
      mayRevise: can(viewer.roles, "revision:write"),
    };
  });
}

const causeForm = z.object({ cause: z.enum([...fitCauses, ""]).transform((value) => value || null), remarks: wordsOrNone(2000) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "fit-check:record");
  const fitCheckId = idParam(params.fitCheckId);
  const form = parseForm(causeForm, await request.formData());
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const named = await nameFitCause(viewer, fitCheckId, form.value.cause, form.value.remarks);
  if (named.ok) return redirect(href("/fit-checks/:fitCheckId", { fitCheckId }));
  const why = named.reason === "sealed" ? "This revision was released and is sealed: what its decision rests on can't change." : "Nothing failed in this fit check, so that there is no cause to name.";
  return data({ errors: { form: [why] } as Record<string, string[]>, values: { cause: form.value.cause ?? "", remarks: form.value.remarks } as Record<string, string> }, { status: 409 });
}

const nextStep = { design: "make-revision", print: "record-print", misread: "measure-again" } as const;

export default function FitCheckPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, print, check, results, photos, mayRecord, limits } = loaderData;
  useLive(place.job.id);
  const failed = loaderData.mark === "failed";
  const step = failed && check.cause ? nextStep[check.cause] : null;
  const next =
    step === "make-revision" && loaderData.mayRevise ? (
      <LinkButton to={`${href("/parts/:partId/revisions/new", { partId: place.part.id })}?parent=${place.revision.id}`} weight="primary">Make the next revision</LinkButton>
    ) : step === "record-print" && mayRecord ? (
      <LinkButton to={href("/revisions/:revisionId/prints/new", { revisionId: place.revision.id })} weight="primary">Record a new print</LinkButton>
    ) : step === "measure-again" && mayRecord ? (
      <LinkButton to={href("/mating-parts/:matingPartId", { matingPartId: check.matingPartId })} weight="primary">Measure it again</LinkButton>
    ) : undefined;
  return (
    <Sheet
      rightLabel="Cause and remarks"
      right={
        <>
          {failed && (
            <Section title={check.cause ? `Because of ${causeWords[check.cause]}` : "Why did it fail?"} lead={check.cause || !mayRecord ? undefined : "A bad print asks for a reprint, not for a revision."}>
              {!mayRecord && !check.cause && <p className="text-soft">No cause was named.</p>}
              {next}
            </Section>
          )}
          {check.remarks && (
            <Section title="Remarks" ruled={failed}>
              <p className="whitespace-pre-line">{check.remarks}</p>
            </Section>
          )}
          {mayRecord && (
            <details className="mt-6 first:mt-0" open={(failed && !check.cause) || actionData !== undefined}>
              <summary className="flex min-h-11 items-center font-semibold text-blue">{failed ? (check.cause ? "Change the cause or remarks" : "Name the cause") : "Change the remarks"}</summary>
              <EntryForm errors={actionData?.errors} values={actionData?.values} labels={{ cause: "Cause" }}>
                <FieldGroup>
                  {failed ? (
                    <RadioRow
                      name="cause"
                      label="The cause is"
                      defaultValue={check.cause ?? ""}
                      options={[...fitCauses.map((value) => ({ value, label: causeWords[value] as string })), { value: "", label: "not known yet" }]}
                    />
                  ) : (
                    <input type="hidden" name="cause" value="" />
                  )}
                  <TextArea name="remarks" label="Remarks" optional defaultValue={check.remarks} maxLength={2000} />
                </FieldGroup>
                <SubmitButton weight={next ? "secondary" : "primary"}>Save</SubmitButton>
              </EntryForm>
            </details>
          )}
          {!failed && !check.remarks && !mayRecord && <p className="text-soft">No remarks.</p>}
        </>
      }
    >
      <SheetHeading
        title={loaderData.sentence}
        lead={
          <>
            <Link to={href("/prints/:printId", { printId: print.id })} className="word">Print {print.name}</Link> on{" "}
            <Link to={href("/mating-parts/:matingPartId", { matingPartId: check.matingPartId })} className="word">{check.matingPartName}</Link>, by {check.byName}, <Day at={check.at} time />
          </>
        }
      />
      {print.spoiled && <Notice kind="error">Print {print.name} does not count: {print.spoiled}. What was found on it is kept, and proves nothing.</Notice>}
      {results.map((result) => (
        <FitResult key={result.id} result={result} />
      ))}
      <Section title="Photos" ruled lead={loaderData.photosAsked.length > 0 ? `A photo is still asked for: ${loaderData.photosAsked.map(({ name }) => name).join(", ")}.` : undefined}>
        {photos.length > 0 && <PhotoList photos={photos} />}
        {photos.length === 0 && !mayRecord && <Empty>No photo was taken.</Empty>}
        {loaderData.underWay.map((file) => (
          <Notice key={file.id} kind={file.state === "refused" ? "error" : "info"}>
            {file.name} {file.state === "refused" ? `was refused. ${file.refusal ?? ""}` : "is being checked."}
          </Notice>
        ))}
        {mayRecord && (
          <div className="mt-4 grid gap-4">
            {loaderData.photosAsked.map(({ id, name }) => (
              <div key={id}>
                <p className="mb-1 font-medium">{name}</p>
                <UploadPanel target={{ to: "fit-check", id: check.id, characteristicId: id }} limits={limits} accepts={["photo"]} what={`a photo of ${name}`} camera />
              </div>
            ))}
            <div>
              <p className="mb-1 font-medium">The fit check as a whole</p>
              <UploadPanel target={{ to: "fit-check", id: check.id, characteristicId: null }} limits={limits} accepts={["photo"]} what="photos of the fit" camera />
            </div>
          </div>
        )}
      </Section>
    </Sheet>
  );
}
