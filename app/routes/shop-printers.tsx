import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { readListRequest } from "#app/components/table-query.ts";
import { pageSize } from "#app/data/list.server.ts";
import { listPrinters, printerSorts, type Printer } from "#app/data/printers.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/shop-printers.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Printers · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Printers" }] };

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const page = await inShop(viewer, (tx) => listPrinters(tx, readListRequest(request, printerSorts)));
  return { ...page, pageSize, mayWrite: can(viewer.roles, "equipment:write"), owner: can(viewer.roles, "shop:manage") };
}

const columns: Column<Printer>[] = [
  { key: "name", label: "Printer", sortable: true, cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "process", label: "Process", sortable: true, cell: (row) => row.process },
  { key: "bed", label: "Room (mm)", cell: (row) => row.bedMm },
  { key: "presets", label: "Presets", sortable: true, align: "number", cell: (row) => row.presets },
];

export default function ShopPrintersPage({ loaderData }: Route.ComponentProps) {
  const { rows, total, mayWrite, owner } = loaderData;
  const add = mayWrite ? <LinkButton to={href("/shop/printers/new")} weight="primary">Add a printer</LinkButton> : undefined;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="Printers" actions={add} />
      <DataTable
        caption="Printers"
        captionHidden
        columns={columns}
        rows={rows}
        rowKey={(row) => row.id}
        rowHref={mayWrite ? (row) => href("/shop/printers/:printerId", { printerId: row.id }) : undefined}
        searchLabel="Find a printer"
        filters={<AsideFilter />}
        defaultSort="name"
        total={total}
        pageSize={loaderData.pageSize}
        csvHref={href("/shop/printers.csv")}
        empty={{ text: "No printers. A print preset belongs to one.", action: add }}
      />
    </ShopSheet>
  );
}
