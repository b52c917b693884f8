import { href, Link, redirect } from "react-router";
import { CharacteristicTable } from "#app/components/characteristic-table.tsx";
import { CsvLink } from "#app/components/csv-link.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { moveCharacteristic } from "#app/services/characteristics.server.ts";
import { loadPartPage, type PartPage } from "#app/services/part-page.server.ts";
import type { Route } from "./+types/part.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.part.name} ${loaderData?.part.number} · Spotblue` }];
export const handle: PageHandle<PartPage> = {
  crumbs: ({ job, part }) => [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: part.name }],
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "part:read");
  return inShop(viewer, (tx) => loadPartPage(tx, viewer, idParam(params.partId)));
}

/** Puts a characteristic one place earlier or later. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "part:write");
  const partId = idParam(params.partId);
  const form = await request.formData();
  const id = idParam(String(form.get("id")));
  await inShop(viewer, (tx) => moveCharacteristic(tx, viewer, id, form.get("intent") === "earlier" ? -1 : 1, partId));
  return redirect(href("/parts/:partId", { partId }));
}

type RevisionRow = PartPage["revisions"][number];

const revisionColumns: Column<RevisionRow>[] = [
  { key: "ordinal", label: "Revision", cell: (row) => `${row.ordinal}${row.letter ? `, released as ${row.letter}` : ""}` },
  { key: "reason", label: "Why", cell: (row) => row.reason },
  { key: "from", label: "From", cell: (row) => [row.parentOrdinal === null ? "" : `${row.parentOrdinal}`, row.branchName ? `“${row.branchName}”` : ""].filter(Boolean).join(", ") || <span className="text-soft">the first</span> },
  { key: "status", label: "Status", cell: (row) => row.status ?? <span className="text-soft">no model yet</span> },
  { key: "made", label: "Made", cell: (row) => <>{row.authorName}, <Day at={row.createdAt} /></> },
];

export default function PartPageView({ loaderData }: Route.ComponentProps) {
  const { job, part, characteristics, revisions, facts, mayWrite } = loaderData;
  useLive(job.id);
  const params = { partId: part.id };
  const latest = revisions[0];
  return (
    <Sheet
      rightLabel="About the part"
      right={
        <>
          <Section title="About the part" actions={mayWrite ? <Link className="word" to={href("/parts/:partId/edit", params)}>Change</Link> : undefined}>
            <Facts facts={facts.part} />
          </Section>
          {facts.service && (
            <Section title="In service" ruled>
              {facts.toState.length > 0 && (
                <Notice kind="info" action={mayWrite ? <LinkButton to={href("/parts/:partId/edit", params)}>State it</LinkButton> : undefined}>
                  Not stated yet: {facts.toState.join(", ")}. A {part.kitTitle.toLowerCase()} can't go without it.
                </Notice>
              )}
              <Facts facts={facts.service} />
            </Section>
          )}
          {facts.asks && (
            <Section title="The gate asks for" ruled>
              <Facts facts={facts.asks} />
            </Section>
          )}
        </>
      }
    >
      <SheetHeading
        title={part.name}
        lead={part.setAside ? "Set aside: kept for the record." : undefined}
        actions={latest ? <LinkButton to={href("/revisions/:revisionId", { revisionId: latest.id })} weight="primary">Revision {latest.ordinal}</LinkButton> : undefined}
      />
      {characteristics && (
        <Section
          title="Characteristics"
          lead="In the order in which they are tried. Print limits are not metal limits: a print can't hold what metal can."
          actions={
            <span className="flex flex-wrap items-center gap-x-6">
              {characteristics.length > 0 && <CsvLink href={href("/parts/:partId/characteristics.csv", params)} what="the characteristics" />}
              {mayWrite && <LinkButton to={href("/parts/:partId/characteristics/new", params)}>Add a characteristic</LinkButton>}
            </span>
          }
        >
          <CharacteristicTable
            rows={characteristics}
            mayWrite={mayWrite}
            empty={{ text: "None yet. What must fit, turn, seal or start by hand on the hardware? Each is tried on the print before metal is cut." }}
          />
        </Section>
      )}
      <Section title="Revisions" actions={mayWrite && !part.setAside ? <LinkButton to={latest ? `${href("/parts/:partId/revisions/new", params)}?parent=${latest.id}` : href("/parts/:partId/revisions/new", params)}>Add a revision</LinkButton> : undefined}>
        <DataTable
          caption="Revisions"
          captionHidden
          columns={revisionColumns}
          rows={revisions}
          rowKey={(row) => row.id}
          rowHref={(row) => href("/revisions/:revisionId", { revisionId: row.id })}
          empty={{ text: mayWrite ? "No revision yet. The first is the model as it was measured." : "Nothing was shown to you yet." }}
        />
      </Section>
    </Sheet>
  );
}
