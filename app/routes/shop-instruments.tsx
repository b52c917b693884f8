import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Length } from "#app/components/measure.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { readListRequest } from "#app/components/table-query.ts";
import { trustWords } from "#app/components/trust-words.ts";
import { instrumentSorts, listInstruments, type Instrument } from "#app/data/instruments.server.ts";
import { pageSize } from "#app/data/list.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/shop-instruments.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Instruments · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Instruments" }] };

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const today = new Date().toISOString().slice(0, 10);
  const page = await inShop(viewer, (tx) => listInstruments(tx, readListRequest(request, instrumentSorts)));
  return {
    ...page,
    rows: page.rows.map((row) => ({ ...row, trustWords: trustWords(row, today) })),
    pageSize,
    mayWrite: can(viewer.roles, "equipment:write"),
    owner: can(viewer.roles, "shop:manage"),
  };
}

type Row = Instrument & { trustWords: string };

const columns: Column<Row>[] = [
  { key: "name", label: "Instrument", sortable: true, cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "kind", label: "Kind", sortable: true, cell: (row) => row.kind },
  { key: "resolution", label: "Resolution", sortable: true, align: "number", cell: (row) => <Length mm={row.resolutionMm} align={3} /> },
  { key: "uncertainty", label: "Uncertainty U", sortable: true, align: "number", cell: (row) => <>± <Length mm={row.uncertaintyMm} align={3} /></> },
  { key: "trust", label: "Trust", sortable: true, cell: (row) => row.trustWords },
];

export default function ShopInstrumentsPage({ loaderData }: Route.ComponentProps) {
  const { rows, total, mayWrite, owner } = loaderData;
  const add = mayWrite ? <LinkButton to={href("/shop/instruments/new")} weight="primary">Add an instrument</LinkButton> : undefined;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="Instruments" lead="Every reading carries the uncertainty of what it was read with, and how far that can be trusted." actions={add} />
      <DataTable
        caption="Instruments"
        captionHidden
        columns={columns}
        rows={rows}
        rowKey={(row) => row.id}
        rowHref={mayWrite ? (row) => href("/shop/instruments/:instrumentId", { instrumentId: row.id }) : undefined}
        searchLabel="Find an instrument"
        filters={<AsideFilter />}
        defaultSort="name"
        total={total}
        pageSize={loaderData.pageSize}
        csvHref={href("/shop/instruments.csv")}
        empty={{ text: "No instruments. Without one, a reading's uncertainty is not known.", action: add }}
      />
    </ShopSheet>
  );
}
