import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { readTableQuery } from "#app/components/table-query.ts";
import { jobSorts, listJobs, type Job } from "#app/data/jobs.server.ts";
import { pageSize } from "#app/data/list.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/jobs.ts";

export const meta: Route.MetaFunction = () => [{ title: "Jobs · Spotblue" }];

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "job:read");
  const { searchParams } = new URL(request.url);
  const list = { ...readTableQuery(searchParams, Object.keys(jobSorts), "due"), withSetAside: searchParams.get("aside") === "1" };
  const page = await inShop(viewer, (tx) => listJobs(tx, list));
  // Money and the customer's name are not for everybody who may see that a job exists.
  const rows = page.rows.map(({ id, number, title, customerName, dueOn, setAside, parts }) => ({ id, number, title, customerName, dueOn, setAside, parts }));
  return { ...page, rows, pageSize, mayWrite: can(viewer.roles, "job:write"), showsCustomer: can(viewer.roles, "customer:read") };
}

type Row = Pick<Job, "id" | "number" | "title" | "customerName" | "dueOn" | "setAside"> & { parts: number };

const columns: Column<Row>[] = [
  { key: "number", label: "Number", sortable: true, cell: (row) => row.number },
  { key: "title", label: "Job", sortable: true, cell: (row) => (row.setAside ? `${row.title} (set aside)` : row.title) },
  { key: "customer", label: "Customer", sortable: true, cell: (row) => row.customerName ?? "" },
  { key: "parts", label: "Parts", sortable: true, align: "number", cell: (row) => row.parts },
  { key: "due", label: "Due", sortable: true, align: "number", cell: (row) => (row.dueOn ? <Day at={row.dueOn} /> : "") },
];

export default function JobsPage({ loaderData }: Route.ComponentProps) {
  const { rows, total, mayWrite, showsCustomer } = loaderData;
  return (
    <Sheet>
      <SheetHeading title="Jobs" actions={mayWrite ? <LinkButton to={href("/jobs/new")} weight="primary">Open a job</LinkButton> : undefined} />
      <DataTable
        caption="Jobs"
        captionHidden
        columns={showsCustomer ? columns : columns.filter(({ key }) => key !== "customer")}
        rows={rows}
        rowKey={(row) => row.id}
        rowHref={(row) => href("/jobs/:jobId", { jobId: row.id })}
        searchLabel="Find a job"
        filters={<AsideFilter />}
        defaultSort="due"
        total={total}
        pageSize={loaderData.pageSize}
        csvHref={href("/jobs.csv")}
        empty={{ text: mayWrite ? "No jobs yet. A job holds the promise, the customer's hardware and the parts." : "No job was shared with you yet.", action: mayWrite ? <LinkButton to={href("/jobs/new")}>Open a job</LinkButton> : undefined }}
      />
    </Sheet>
  );
}
