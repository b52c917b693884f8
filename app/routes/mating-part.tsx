import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { CsvLink } from "#app/components/csv-link.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { LengthField, SelectField, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { useLive } from "#app/components/live.tsx";
import { useUnits } from "#app/components/measure.tsx";
import { MeasurementTable } from "#app/components/measurement-table.tsx";
import { Notice } from "#app/components/notice.tsx";
import { PhotoList } from "#app/components/photo-list.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { instrumentLabel, trustWords } from "#app/components/trust-words.ts";
import { UploadPanel } from "#app/components/upload/upload-panel.tsx";
import { listUploadsTo } from "#app/data/files.server.ts";
import { listInstrumentsToPick } from "#app/data/fit-checks.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { findMatingPart, listMeasurements } from "#app/data/mating-parts.server.ts";
import { listMatingPartPhotos } from "#app/data/photos.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { env } from "#app/env.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosenOrNull, length, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { measureMatingPart, putMeasurementAside } from "#app/services/mating-parts.server.ts";
import type { Route } from "./+types/mating-part.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.matingPart.name} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job, matingPart }) => [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: matingPart.name }],
};

/** The customer's hardware: its custody, its photos, and what was measured on it. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "mating-part:read");
  return inShop(viewer, async (tx) => {
    const matingPart = orNotFound(await findMatingPart(tx, idParam(params.matingPartId)));
    const job = orNotFound(await findJob(tx, matingPart.jobId));
    return {
      job: { id: job.id, number: job.number, title: job.title },
      matingPart,
      measurements: (await listMeasurements(tx, matingPart.id)).sort((a, b) => Number(a.setAside) - Number(b.setAside)),
      instruments: await listInstrumentsToPick(tx),
      photos: await listMatingPartPhotos(tx, matingPart.id),
      underWay: (await listUploadsTo(tx, { to: "mating-part", id: matingPart.id })).map(({ id, name, state, refusal }) => ({ id, name, state, refusal })),
      limits: { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB },
      today: new Date().toISOString().slice(0, 10),
      mayWrite: can(viewer.roles, "mating-part:write"),
      mayUpload: can(viewer.roles, "file:upload"),
    };
  });
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "mating-part:write");
  const matingPartId = idParam(params.matingPartId);
  const formData = await request.formData();
  const intent = formData.get("intent");
  const here = href("/mating-parts/:matingPartId", { matingPartId });
  if (intent === "set-aside" || intent === "take-up") {
    const id = idParam(String(formData.get("id")));
    await inShop(viewer, (tx) => putMeasurementAside(tx, viewer, matingPartId, id, intent === "set-aside"));
    return redirect(here);
  }
  const form = parseForm(
    (units) => z.object({ name: words("Say what was measured", 120), valueMm: length(units, "Give the reading"), instrumentId: chosenOrNull, note: wordsOrNone(500) }),
    formData,
  );
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const measured = await inShop(viewer, (tx) => measureMatingPart(tx, viewer, matingPartId, form.value));
  if (measured.ok) return redirect(here);
  return data({ errors: { instrumentId: ["Pick an instrument of the list"] } as Record<string, string[]>, values: Object.fromEntries(formData) as Record<string, string> }, { status: 400 });
}

const labels = { name: "What was measured", valueMm: "Reading", instrumentId: "With", note: "Note" };

export default function MatingPartPage({ loaderData, actionData }: Route.ComponentProps) {
  const { job, matingPart, measurements, instruments, photos, today, mayWrite } = loaderData;
  useLive(job.id);
  const units = useUnits();
  const params = { matingPartId: matingPart.id };
  return (
    <Sheet rightLabel="Custody" right={<Custody shown={loaderData} />}>
      <SheetHeading title={matingPart.name} lead={matingPart.setAside ? "Set aside: kept for the record." : matingPart.description || undefined} />
      <Section title="Measured on it" lead="As read, with the instrument's uncertainty of that day. A reading that was wrong is set aside and stays in the record." actions={measurements.length > 0 ? <CsvLink href={href("/mating-parts/:matingPartId/measurements.csv", params)} what="the measurements" /> : undefined}>
        <MeasurementTable rows={measurements} mayWrite={mayWrite} />
        {mayWrite && (
          <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="measure" clearWhenSent className="mt-5 max-w-3xl">
            <FieldGroup columns={2}>
              <TextField name="name" label={labels.name} placeholder="Pilot diameter, at the top" />
              <LengthField name="valueMm" label={labels.valueMm} />
              <SelectField name="instrumentId" label={labels.instrumentId} optional prompt="no instrument: uncertainty not known" options={instruments.map((one) => ({ value: one.id, label: instrumentLabel(one, today, units) }))} wide />
              <TextField name="note" label={labels.note} optional wide />
            </FieldGroup>
            <SubmitButton>Add the measurement</SubmitButton>
          </EntryForm>
        )}
      </Section>
      <Section title="Photos" ruled>
        {photos.length > 0 ? (
          <PhotoList photos={photos.map((photo) => ({ ...photo, shows: photo.name, spots: [] }))} />
        ) : (
          <p className="text-soft">{loaderData.mayUpload ? "None yet. The condition it came in is worth a photo." : "No photo was taken."}</p>
        )}
        {loaderData.underWay.map((file) => (
          <Notice key={file.id} kind={file.state === "refused" ? "error" : "info"}>
            {file.name} {file.state === "refused" ? `was refused. ${file.refusal ?? ""}` : file.state === "checking" ? "is being checked." : "is not sent to its end yet: choose the same file again to go on."}
          </Notice>
        ))}
        {loaderData.mayUpload && (
          <div className="mt-4">
            <UploadPanel target={{ to: "mating-part", id: matingPart.id }} limits={loaderData.limits} accepts={["photo"]} what="photos of it" camera />
          </div>
        )}
      </Section>
    </Sheet>
  );
}

function Custody({ shown: { matingPart, instruments, measurements, today, mayWrite } }: { shown: Route.ComponentProps["loaderData"] }) {
  const used = instruments.filter(({ id }) => measurements.some(({ instrumentId, setAside }) => instrumentId === id && !setAside));
  return (
    <>
      <Section title="Custody" actions={mayWrite ? <Link className="word" to={href("/mating-parts/:matingPartId/edit", { matingPartId: matingPart.id })}>Change</Link> : undefined}>
        <Facts
          facts={[
            { label: "Came in", value: matingPart.cameInOn ? <Day at={matingPart.cameInOn} /> : "not here" },
            { label: "Condition then", value: matingPart.conditionIn || "not said" },
            { label: "Went out", value: matingPart.wentOutOn ? <Day at={matingPart.wentOutOn} /> : matingPart.cameInOn ? "still here" : "" },
            ...(matingPart.wentOutOn ? [{ label: "Condition then", key: "out", value: matingPart.conditionOut || "not said" }] : []),
          ]}
        />
      </Section>
      {used.length > 0 && (
        <Section title="Measured with" ruled>
          <Facts facts={used.map((one) => ({ key: one.id, label: one.name, value: trustWords(one, today) }))} />
        </Section>
      )}
    </>
  );
}
