import { data, href, Link } from "react-router";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { readTableQuery } from "#app/components/table-query.ts";
import { pageSize } from "#app/data/list.server.ts";
import { checkLogbook, listLogbook, logbookSorts } from "#app/data/logbook.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/logbook.ts";

export const meta: Route.MetaFunction = () => [{ title: "Logbook · Spotblue" }];

/** `?job=…` keeps it to one job. */
export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "logbook:read");
  const { searchParams } = new URL(request.url);
  const list = readTableQuery(searchParams, Object.keys(logbookSorts), "-seq");
  const job = searchParams.get("job");
  const page = await inShop(viewer, (tx) => listLogbook(tx, list, job ? { jobId: idParam(job) } : {}));
  return { rows: page.rows.map(({ entry, hash }) => ({ ...entry, hash })), total: page.total, pageSize };
}

export async function action({ context }: Route.ActionArgs) {
  const viewer = requireCan(context, "logbook:read");
  const verdict = await inShop(viewer, (tx) => checkLogbook(tx, viewer.shopId));
  return data(verdict.ok ? { ok: true as const, entries: verdict.head.seq, hash: verdict.head.hash } : { ok: false as const, why: verdict.why });
}

type Row = Route.ComponentProps["loaderData"]["rows"][number];

/** Where a page shows what an entry is about. */
function subjectHref({ subjectType, subjectId, jobId }: Row): string | null {
  if (!subjectId) return null;
  if (subjectType === "revision") return href("/revisions/:revisionId", { revisionId: subjectId });
  if (subjectType === "part") return href("/parts/:partId", { partId: subjectId });
  if (subjectType === "print") return href("/prints/:printId", { printId: subjectId });
  if (subjectType === "fit-check") return href("/fit-checks/:fitCheckId", { fitCheckId: subjectId });
  if (subjectType === "decision") return href("/packets/:decisionId", { decisionId: subjectId });
  return jobId ? href("/jobs/:jobId", { jobId }) : null;
}

const said = (value: unknown): string => (Array.isArray(value) ? value.map(said).join(", ") : typeof value === "object" && value !== null ? JSON.stringify(value) : String(value));

const columns: Column<Row>[] = [
  { key: "seq", label: "No.", sortable: true, align: "number", cell: (row) => row.seq },
  { key: "at", label: "When", cell: (row) => <Day at={row.at} time /> },
  { key: "actor", label: "Who", sortable: true, cell: (row) => row.actor },
  {
    key: "action",
    label: "What",
    sortable: true,
    cell: (row) => {
      const to = subjectHref(row);
      return to ? <Link className="word" to={to}>{row.action}</Link> : row.action;
    },
  },
  { key: "detail", label: "More", cell: (row) => Object.entries(row.detail).filter(([, value]) => value !== null).map(([key, value]) => `${key}: ${said(value).slice(0, 60)}`).join("; ") },
];

export default function LogbookPage({ loaderData, actionData }: Route.ComponentProps) {
  return (
    <Sheet>
      <SheetHeading
        title="Logbook"
        lead="Everything that happened, in order. Each entry carries the hash of the one before, so that none can be changed or taken out unseen."
        actions={
          <EntryForm>
            <SubmitButton weight="secondary" pendingText="Checking">Check the chain</SubmitButton>
          </EntryForm>
        }
      />
      {actionData && (actionData.ok ? <Notice kind="success">All {actionData.entries} entries are the ones that were written. The last hash is {actionData.hash.slice(0, 16)}…</Notice> : <Notice kind="error">The chain is broken: {actionData.why}.</Notice>)}
      <DataTable caption="Logbook" captionHidden columns={columns} rows={loaderData.rows} rowKey={(row) => String(row.seq)} searchLabel="Find in the logbook" defaultSort="-seq" total={loaderData.total} pageSize={loaderData.pageSize} csvHref={href("/logbook.csv")} empty={{ text: "Nothing happened yet." }} />
    </Sheet>
  );
}
