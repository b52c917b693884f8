import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Empty } from "#app/components/empty.tsx";
import { TextArea, TextField } from "#app/components/fields.tsx";
import { FieldGroup, type FormFaults, type FormValues } from "#app/components/form.tsx";
import { GateLines, GateMark, GateVerdict } from "#app/components/gate-marks.tsx";
import { countWord } from "#app/components/gate-words.ts";
import { HoleTable } from "#app/components/hole-table.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Mass, useUnits } from "#app/components/measure.tsx";
import { ModelFactsTable } from "#app/components/model-facts-table.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";
import { RevisionTree } from "#app/components/revision-tree.tsx";
import { Section, Sheet } from "#app/components/sheet.tsx";
import { TitleBlock } from "#app/components/title-block.tsx";
import { ModelViewer } from "#app/components/viewer/model-viewer.tsx";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { words, wordsOrNull } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { nameRevisionBranch, putRevisionAside } from "#app/services/parts.server.ts";
import { loadSheet } from "#app/services/sheet.server.ts";
import type { Route } from "./+types/revision.ts";
import type { PageHandle } from "./signed-in.tsx";

type Shown = Route.ComponentProps["loaderData"];

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.part.name} ${loaderData?.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Shown> = {
  crumbs: ({ job, part, revision, may }) => [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    { label: part.name, to: may.seePart ? href("/parts/:partId", { partId: part.id }) : undefined },
    { label: `Revision ${revision.ordinal}` },
  ],
};

/** The sheet of a revision. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "revision:read");
  return inShop(viewer, (tx) => loadSheet(tx, viewer, idParam(params.revisionId)));
}

const asideForm = z.object({ reason: words("Say why it is set aside", 1000) });
const branchForm = z.object({ branchName: wordsOrNull(60) });
const sealed = "This revision was released: it stays as it is. What should change goes into the next revision.";

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "revision:write");
  const revisionId = idParam(params.revisionId);
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const form = intent === "set-aside" ? parseForm(asideForm, formData) : intent === "name-branch" ? parseForm(branchForm, formData) : null;
  if (form && !form.ok) return data({ intent, errors: form.errors, values: form.values }, { status: 400 });
  const result = await inShop(viewer, async (tx) => {
    if (form?.ok && "branchName" in form.value) return nameRevisionBranch(tx, viewer, revisionId, form.value.branchName);
    if (form?.ok && "reason" in form.value) return putRevisionAside(tx, viewer, revisionId, form.value.reason);
    if (intent === "take-up") return putRevisionAside(tx, viewer, revisionId, null);
    throw new Response("Not found", { status: 404, statusText: "Not found" });
  });
  if (!result.ok) return data({ intent, errors: { form: [sealed] } as FormFaults, values: {} as FormValues }, { status: 409 });
  return redirect(href("/revisions/:revisionId", { revisionId }));
}

export default function RevisionPage({ loaderData, actionData }: Route.ComponentProps) {
  const { job, part, revision, tree, gate, may } = loaderData;
  useLive(job.id);
  return (
    <Sheet
      bleed
      top={
        <RevisionTree
          {...tree}
          add={may.write ? { href: `${href("/parts/:partId/revisions/new", { partId: part.id })}?parent=${revision.id}`, label: `Add revision ${loaderData.nextOrdinal}`, text: `from ${revision.ordinal}, or from any other` } : undefined}
        />
      }
      rightLabel={gate ? "Gate" : "About this revision"}
      right={
        <>
          {revision.setAside && <AsideNotice shown={loaderData} answer={actionData} />}
          {gate ? (
            <>
              <GateVerdict {...gate} />
              <GateLines lines={gate.lines} />
            </>
          ) : (
            <About shown={loaderData} />
          )}
          <Ways shown={loaderData} />
          {may.write && !revision.sealed && <ChangeRevision shown={loaderData} answer={actionData} />}
        </>
      }
      band={<Band shown={loaderData} />}
      titleBlock={<Block shown={loaderData} />}
    >
      <div className="flex h-full flex-col lg:min-h-[33rem]">
        <h1 className="sr-only">
          {part.name}, revision {revision.ordinal}
        </h1>
        <Model shown={loaderData} />
      </div>
    </Sheet>
  );
}

interface Part {
  shown: Shown;
}

function Model({ shown: { part, revision, model, holes, callouts, may } }: Part) {
  const files = href("/revisions/:revisionId/files", { revisionId: revision.id });
  if (!model) {
    return (
      <div className="p-5">
        <Empty action={may.upload && <LinkButton to={files} weight="primary">Drop its model</LinkButton>}>{may.upload ? "No model yet. Drop the STEP, and this revision is weighed and its holes are found." : "No model was stored with this revision yet."}</Empty>
      </div>
    );
  }
  if (model.state === "failed") {
    return (
      <div className="p-5">
        <Notice kind="error" action={may.upload && <LinkButton to={files} weight="quiet">Look at the files</LinkButton>}>
          The model can't be read: {model.reason}
        </Notice>
      </div>
    );
  }
  if (!model.viewReady) {
    return (
      <div className="mx-auto flex h-full min-h-80 max-w-sm flex-col justify-center p-5">
        <ProgressLine label={model.state === "done" ? "Making the view" : "Measuring the model"} share={model.state === "running" ? model.progress : null} text={model.step || "waiting its turn"} />
      </div>
    );
  }
  const spots = callouts.flatMap(({ id, number, pointMm, body, open }) => (pointMm && open ? [{ id, number, point_mm: pointMm, label: body, href: href("/callouts/:calloutId", { calloutId: id }) }] : []));
  const count = holes.reduce((sum, { count }) => sum + count, 0);
  return (
    <ModelViewer
      meshUrl={href("/files/:fileId/:kind", { fileId: model.fileId, kind: "view-mesh" })}
      pictureUrl={model.pictured ? href("/files/:fileId/:kind", { fileId: model.fileId, kind: "thumbnail" }) : null}
      name={`${part.name}, revision ${revision.ordinal}`}
      closed={model.closed}
      markers={spots}
      note={
        <>
          {model.kind === "step" && <>{countWord(count)} {count === 1 ? "hole" : "holes"} found</>}
          {model.kind === "stl" && "drawn from the STL"}
          {may.callouts && <>, {countWord(spots.length)} {spots.length === 1 ? "callout" : "callouts"}</>}
        </>
      }
      more={
        may.callouts && (
          <Link to={href("/revisions/:revisionId/callouts", { revisionId: revision.id })} className="inline-flex min-h-11 items-center font-label text-label font-semibold text-soft hover:text-blue lg:min-h-9">
            Callouts
          </Link>
        )
      }
    />
  );
}

function Band({ shown: { part, model, facts, parent, holes, calculations, warnings, may } }: Part) {
  if (!facts) return <p className="py-2 text-soft">{model && model.state !== "failed" ? "Measures stand here as soon as the model is measured." : "No measures yet."}</p>;
  return (
    <>
      <div className="grid gap-x-10 gap-y-6 xl:grid-cols-[minmax(21rem,1fr)_minmax(0,2fr)]">
        <ModelFactsTable facts={facts} parent={parent} noMass={!part.hasDensity ? "no stock chosen" : "not closed"} />
        <div>
          {model?.kind === "step" && <HoleTable holes={holes} instructions={may.instruct} />}
          {calculations.length > 0 && <CalculationTable calculations={calculations} />}
        </div>
      </div>
      {warnings.map((warning) => (
        <p key={warning} className="border-t border-hairline py-2 text-attention">
          {warning}
        </p>
      ))}
    </>
  );
}

const calculationColumns: Column<Shown["calculations"][number]>[] = [
  { key: "title", label: "Calculation", cell: ({ title }) => title },
  { key: "verdict", label: "Verdict", cell: ({ verdict }) => (verdict === "information" ? "information" : <GateMark state={verdict === "pass" ? "met" : "failed"} word={verdict === "pass" ? "passes" : "fails"} />) },
  { key: "room", label: "Room", align: "number", cell: ({ room }) => room ?? "–" },
];

function CalculationTable({ calculations }: Pick<Shown, "calculations">) {
  return <DataTable caption="Calculations" captionHidden columns={calculationColumns} rows={calculations} rowKey={({ id }) => id} rowHref={({ id }) => href("/calculations/:calculationId", { calculationId: id })} empty={{ text: "No calculation yet." }} />;
}

const roleWords: Record<string, string> = { step: "STEP", stl: "STL", drawing: "PDF" };

function Block({ shown: { part, revision, shopName, facts, files } }: Part) {
  const units = useUnits();
  return (
    <TitleBlock
      cells={[
        { label: "Part", value: part.name, phone: true },
        { label: "Number", value: part.number, phone: true },
        { label: "Revision", value: revision.letter ? `${revision.ordinal}, ${revision.letter}` : revision.ordinal, phone: true },
        { label: "Shop", value: shopName },
        { label: "Stock", value: part.stock ?? "not chosen" },
        { label: "Status", value: revision.status ?? "no model" },
        ...(files.length > 0
          ? [
              {
                label: "Files",
                value: files.map(({ id, role, name }, index) => (
                  <span key={id}>
                    {index > 0 && ", "}
                    <a href={href("/files/:fileId", { fileId: id })} download title={name} className="word">
                      {roleWords[role]}
                    </a>
                  </span>
                )),
              },
            ]
          : []),
        { label: "Mass", value: facts?.massKg == null ? "–" : <Mass kg={facts.massKg} />, span: files.length > 0 ? undefined : 2 },
        { label: "Units", value: units },
      ]}
    />
  );
}

/** The right column of those who don't see the gate: what concerns them. */
function About({ shown: { revision, instructions, may } }: Part) {
  return (
    <Section title={`Revision ${revision.ordinal}${revision.branchName ? `, ${revision.branchName}` : ""}`}>
      <p>{revision.reason}</p>
      {may.instruct && (
        <p className="mt-3 text-soft">
          {instructions
            ? `${[instructions.generalTolerance, instructions.edgeBreak, instructions.coating === "none" ? "no coating" : instructions.coating].filter(Boolean).join("; ")}. ${instructions.confirmedName ? `Confirmed by ${instructions.confirmedName}.` : "Not confirmed yet."}`
            : "Tolerances, edges and coating are not stated yet."}
        </p>
      )}
    </Section>
  );
}

/** Where the work on this revision goes on. */
function Ways({ shown: { job, revision, gate, may } }: Part) {
  const params = { revisionId: revision.id };
  const ways = [
    may.upload && { label: "Files", to: href("/revisions/:revisionId/files", params) },
    may.print && !revision.sealed && { label: revision.prints ? `Print it again (${countWord(revision.prints)} so far)` : "Record a print", to: href("/revisions/:revisionId/prints/new", params) },
    may.calculate && { label: "Attach a calculation", to: href("/revisions/:revisionId/calculations/new", params) },
    may.instruct && { label: "Instructions", to: href("/revisions/:revisionId/instructions", params) },
    may.makeability && { label: "Makeability", to: href("/revisions/:revisionId/makeability", params) },
    may.recordApproval && { label: "Customer's answer", to: href("/revisions/:revisionId/approval", params) },
    may.giveApproval && { label: "Say whether it is right", to: href("/your-job/:jobId", { jobId: job.id }) },
    may.cautions && { label: "Cautions", to: href("/revisions/:revisionId/cautions", params) },
    gate && { label: revision.sealed ? "Decision and packet" : "To the gate", to: href("/revisions/:revisionId/gate", params) },
  ].filter((way) => way !== false && way !== null);
  return (
    <nav aria-label="Of this revision" className="mt-4 flex flex-wrap gap-x-6 border-t border-rule pt-2">
      {ways.map(({ label, to }) => (
        <Link key={to} to={to} className="word inline-flex min-h-11 items-center lg:min-h-9">
          {label}
        </Link>
      ))}
    </nav>
  );
}

interface Answer {
  answer: { intent: string; errors: FormFaults; values: FormValues } | undefined;
}

const faultsOf = (answer: Answer["answer"], intent: string) => (answer?.intent === intent ? { errors: answer.errors, values: answer.values } : {});

function AsideNotice({ shown: { revision, may }, answer }: Part & Answer) {
  return (
    <Notice
      kind="info"
      action={
        may.write && (
          <Confirm intent="take-up" trigger="Take up again" weight="quiet" title={`Take revision ${revision.ordinal} up again`} text="It counts again as every other revision of the part, with all that was recorded of it." confirmText="Take up again" {...faultsOf(answer, "take-up")} />
        )
      }
    >
      Set aside{revision.setAsideReason ? `: ${revision.setAsideReason}` : "."}
    </Notice>
  );
}

function ChangeRevision({ shown: { revision }, answer }: Part & Answer) {
  return (
    <div className="flex flex-wrap gap-x-6">
      <Confirm
        intent="name-branch"
        trigger={revision.branchName ? "Rename the branch" : "Name the branch"}
        weight="quiet"
        title={`Name what begins with revision ${revision.ordinal}`}
        text="The name stands in the tree beside the number. Leave it empty to take a name off."
        confirmText="Save the name"
        {...faultsOf(answer, "name-branch")}
      >
        <FieldGroup>
          <TextField name="branchName" label="Branch" optional defaultValue={revision.branchName} placeholder="Hinge towards the rider" />
        </FieldGroup>
      </Confirm>
      {!revision.setAside && (
        <Confirm
          intent="set-aside"
          trigger="Set aside"
          weight="quiet"
          title={`Set revision ${revision.ordinal} aside`}
          text="It stays in the tree with all its records, and can be taken up again. Until then it can't be released."
          confirmText="Set aside"
          {...faultsOf(answer, "set-aside")}
        >
          <FieldGroup>
            <TextArea name="reason" label="Why" rows={2} />
          </FieldGroup>
        </Confirm>
      )}
    </div>
  );
}
