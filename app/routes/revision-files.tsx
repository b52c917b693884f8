import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Confirm } from "#app/components/confirm.tsx";
import { Day } from "#app/components/day.tsx";
import { Empty } from "#app/components/empty.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { bytesText, ModelFile, type ModelFileView } from "#app/components/model-file.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { UploadPanel } from "#app/components/upload/upload-panel.tsx";
import { listRevisionFiles, listUploadsTo, type ModelFile as StoredModelFile } from "#app/data/files.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { isClosed } from "#app/domain/model-facts.ts";
import { env } from "#app/env.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { giveUpUpload, remeasure, removeRevisionFile, stateMeshUnit, type FileChange } from "#app/services/revision-files.server.ts";
import type { Route } from "./+types/revision-files.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Files: ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Files") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "file:upload");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const files = await listRevisionFiles(tx, place.revision.id);
    const uploads = await listUploadsTo(tx, { to: "revision", id: place.revision.id });
    return {
      place,
      limits: { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB },
      models: files.filter(({ role }) => role === "step" || role === "stl").map(toModelView),
      photos: files.filter(({ role }) => role === "photo").map(({ id, name, bytes, storedAt, uploadedByName, derived }) => ({ id, name, bytes, storedAt, uploadedByName, pictured: derived.includes("thumbnail") })),
      drawings: files.filter(({ role }) => role === "drawing").map(({ id, name, bytes, storedAt, uploadedByName }) => ({ id, name, bytes, storedAt, uploadedByName })),
      uploads: uploads.map(({ id, name, bytes, state, refusal, createdAt, uploadedByName }) => ({ id, name, bytes, state, refusal, createdAt, uploadedByName })),
    };
  });
}

function toModelView(file: StoredModelFile): ModelFileView {
  const { id, name, bytes, sha256, unit, measure } = file;
  const document = measure?.document ?? null;
  return {
    id,
    name,
    bytes,
    sha256,
    unit,
    kind: file.role as "step" | "stl",
    state: measure?.state ?? "waiting",
    progress: measure?.progress ?? 0,
    step: measure?.step ?? "",
    reason: measure?.reason ?? null,
    measured: document && {
      sizeMm: document.bounds_mm?.size ?? null,
      volumeMm3: isClosed(document) ? document.volume_mm3 : null,
      unit: document.unit,
      warnings: document.warnings,
      what: document.solid
        ? `${document.solid.solids === 1 ? "one" : document.solid.solids} ${document.solid.valid ? "valid" : "invalid"} ${document.solid.solids === 1 ? "solid" : "solids"}, ${document.solid.faces} faces`
        : `${(document.mesh?.triangles ?? 0).toLocaleString("en")} triangles, ${document.mesh?.closed ? "closed" : `not closed: ${document.mesh?.openEdges ?? 0} open edges`}`,
    },
  };
}

const changeForm = z.discriminatedUnion("intent", [
  z.object({ intent: z.literal("remove"), fileId: z.uuid() }),
  z.object({ intent: z.literal("measure-again"), fileId: z.uuid() }),
  z.object({ intent: z.literal("give-up"), fileId: z.uuid() }),
  z.object({ intent: z.literal("state-unit"), fileId: z.uuid(), unit: z.enum(["mm", "in"], { error: "Say which unit" }) }),
]);

const refusals = {
  sealed: "This revision was released: its files can't change. Add the next revision for another model.",
  "not-here": "This file does not belong to the revision any more. Load the page again.",
  "not-a-mesh": "Only a model is measured, and only an STL needs its unit stated.",
};

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "file:upload");
  const revisionId = idParam(params.revisionId);
  const form = parseForm(changeForm, await request.formData());
  if (!form.ok) return data({ refusal: "Load the page again, and choose once more." }, { status: 400 });
  const { fileId } = form.value;
  let result: FileChange;
  switch (form.value.intent) {
    case "remove":
      result = await removeRevisionFile(viewer, revisionId, fileId);
      break;
    case "measure-again":
      result = await remeasure(viewer, revisionId, fileId);
      break;
    case "give-up":
      result = await giveUpUpload(viewer, revisionId, fileId);
      break;
    case "state-unit":
      result = await stateMeshUnit(viewer, revisionId, fileId, form.value.unit);
  }
  return result.ok ? redirect(href("/revisions/:revisionId/files", { revisionId })) : data({ refusal: refusals[result.reason] }, { status: 409 });
}

export default function RevisionFilesPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, models, photos, drawings, uploads, limits } = loaderData;
  const { revision, part, job } = place;
  useLive(job.id);
  const sheet = href("/revisions/:revisionId", { revisionId: revision.id });
  const measured = models.some(({ state }) => state === "done");
  const removal = (file: { id: string; name: string }) => (
    <Confirm
      intent="remove"
      sends={{ fileId: file.id }}
      trigger="Take off"
      weight="quiet"
      title={`Take ${file.name} off revision ${revision.ordinal}`}
      text="Prints and answers that name it keep it; the revision counts without it from now on."
      confirmText="Take it off"
    />
  );
  return (
    <Sheet>
      <SheetHeading
        title={`Files of ${part.name} ${revision.ordinal}`}
        lead={revision.sealed ? "This revision was released: its files are sealed, and stay as they are." : "A STEP for the machine shop, the STL it is printed from, photos and drawings. A new model takes the place of the one before."}
        actions={measured && <LinkButton to={sheet} weight="primary">Open the sheet</LinkButton>}
      />
      <div className="max-w-4xl">
        {actionData && <Notice kind="error">{actionData.refusal}</Notice>}
        {!revision.sealed && <UploadPanel target={{ to: "revision", id: revision.id }} limits={limits} accepts={["step", "stl", "photo", "pdf"]} what="STEP, STL, photos or PDF drawings" />}
        {uploads.map((upload) => (
          <div key={upload.id} className="mt-3">
            <Upload upload={upload} />
          </div>
        ))}
        <Section title="Model">
          {models.length === 0 && <Empty>No model yet. Drop the STEP: the part is weighed, and its holes are found.</Empty>}
          <div className="divide-y divide-hairline">
            {models.map((file) => (
              <div key={file.id} className="py-4 first:pt-0">
                <ModelFile file={file} change={revision.sealed ? null : { remove: removal(file) }} />
              </div>
            ))}
          </div>
        </Section>
        {photos.length > 0 && (
          <Section title="Photos">
            <ul className="grid gap-5 sm:grid-cols-2 lg:grid-cols-3">
              {photos.map((photo) => (
                <li key={photo.id}>
                  {photo.pictured ? (
                    <a href={href("/files/:fileId/:kind", { fileId: photo.id, kind: "screen" })} className="block border border-hairline">
                      <img src={href("/files/:fileId/:kind", { fileId: photo.id, kind: "thumbnail" })} alt={photo.name} loading="lazy" className="aspect-4/3 w-full object-cover" />
                    </a>
                  ) : (
                    <ProgressLine label="Making the picture" share={null} />
                  )}
                  <div className="mt-1 flex flex-wrap items-baseline justify-between gap-x-4">
                    <p className="text-sm text-soft [overflow-wrap:anywhere]">
                      {photo.name}, {photo.uploadedByName}
                    </p>
                    {!revision.sealed && removal(photo)}
                  </div>
                </li>
              ))}
            </ul>
          </Section>
        )}
        {drawings.length > 0 && (
          <Section title="Drawings">
            <ul className="divide-y divide-hairline">
              {drawings.map((drawing) => (
                <li key={drawing.id} className="flex flex-wrap items-baseline justify-between gap-x-6 py-1">
                  <a href={href("/files/:fileId", { fileId: drawing.id })} download className="word inline-flex min-h-11 items-center">
                    {drawing.name}
                  </a>
                  <span className="text-soft">
                    {bytesText(drawing.bytes)}, {drawing.uploadedByName}
                    {drawing.storedAt && (
                      <>
                        , <Day at={drawing.storedAt} />
                      </>
                    )}
                  </span>
                  {!revision.sealed && removal(drawing)}
                </li>
              ))}
            </ul>
          </Section>
        )}
      </div>
    </Sheet>
  );
}

interface UploadProps {
  upload: { id: string; name: string; bytes: number; state: string; refusal: string | null; createdAt: Date; uploadedByName: string };
}

/** An upload as the shop knows it: from this browser or another one. */
function Upload({ upload: { id, name, state, refusal, createdAt, uploadedByName } }: UploadProps) {
  const giveUp = (word: string) => (
    <EntryForm intent="give-up">
      <input type="hidden" name="fileId" value={id} />
      <SubmitButton weight="quiet">{word}</SubmitButton>
    </EntryForm>
  );
  if (state === "refused") {
    return (
      <Notice kind="error" action={giveUp("Take off the list")}>
        <b>{name}</b> was not taken. {refusal}
      </Notice>
    );
  }
  if (state === "checking") return <ProgressLine label={`Checking ${name}`} share={null} text="its hash is compared" />;
  return (
    <Notice kind="info" action={giveUp("End it")}>
      {name} is being sent, begun by {uploadedByName} <Day at={createdAt} time />. If it stopped, choose the same file again: it goes on where it stopped.
    </Notice>
  );
}
