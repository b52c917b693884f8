import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { readTableQuery } from "#app/components/table-query.ts";
import { customerSorts, listCustomers, type Customer } from "#app/data/customers.server.ts";
import { pageSize } from "#app/data/list.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/customers.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Customers · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [] };

function readList(request: Request) {
  const { searchParams } = new URL(request.url);
  return { ...readTableQuery(searchParams, Object.keys(customerSorts), "name"), withSetAside: searchParams.get("aside") === "1" };
}

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "customer:read");
  const page = await inShop(viewer, (tx) => listCustomers(tx, readList(request)));
  return { ...page, pageSize };
}

type Row = Customer & { jobs: number };

const columns: Column<Row>[] = [
  { key: "name", label: "Name", sortable: true, cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "email", label: "E-mail", sortable: true, cell: (row) => row.email ?? "" },
  { key: "phone", label: "Phone", cell: (row) => row.phone ?? "" },
  { key: "jobs", label: "Jobs", sortable: true, align: "number", cell: (row) => row.jobs },
];

export default function CustomersPage({ loaderData }: Route.ComponentProps) {
  return (
    <Sheet>
      <SheetHeading title="Customers" actions={<LinkButton to={href("/customers/new")} weight="primary">Add a customer</LinkButton>} />
      <DataTable
        caption="Customers"
        captionHidden
        columns={columns}
        rows={loaderData.rows}
        rowKey={(row) => row.id}
        rowHref={(row) => href("/customers/:customerId", { customerId: row.id })}
        searchLabel="Find a customer"
        filters={<AsideFilter />}
        defaultSort="name"
        total={loaderData.total}
        pageSize={loaderData.pageSize}
        csvHref={href("/customers.csv")}
        empty={{ text: "No customers yet. A job belongs to one.", action: <LinkButton to={href("/customers/new")}>Add a customer</LinkButton> }}
      />
    </Sheet>
  );
}
