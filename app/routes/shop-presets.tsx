import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Length, Num } from "#app/components/measure.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { readListRequest } from "#app/components/table-query.ts";
import { pageSize } from "#app/data/list.server.ts";
import { listPresets, presetSorts, type PrintPreset } from "#app/data/printers.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/shop-presets.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Print presets · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Print presets" }] };

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const page = await inShop(viewer, (tx) => listPresets(tx, readListRequest(request, presetSorts)));
  return { ...page, pageSize, mayWrite: can(viewer.roles, "equipment:write"), owner: can(viewer.roles, "shop:manage") };
}

const columns: Column<PrintPreset>[] = [
  { key: "name", label: "Preset", sortable: true, cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "printer", label: "Printer", sortable: true, cell: (row) => row.printerName },
  { key: "material", label: "Material", sortable: true, cell: (row) => row.material },
  { key: "layer", label: "Layer", sortable: true, align: "number", cell: (row) => <Length mm={row.layerMm} /> },
  { key: "walls", label: "Walls", sortable: true, align: "number", cell: (row) => row.walls },
  { key: "infill", label: "Infill", sortable: true, align: "number", cell: (row) => <Num value={row.infillPct} unit="%" /> },
  { key: "scale", label: "Scale", align: "number", cell: (row) => (row.scaleX === 1 && row.scaleY === 1 && row.scaleZ === 1 ? "as modelled" : [row.scaleX, row.scaleY, row.scaleZ].join(" × ")) },
];

export default function ShopPresetsPage({ loaderData }: Route.ComponentProps) {
  const { rows, total, mayWrite, owner } = loaderData;
  const add = mayWrite ? <LinkButton to={href("/shop/presets/new")} weight="primary">Add a print preset</LinkButton> : undefined;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="Print presets" lead="A print is recorded by picking one. Prints keep the settings they were made with." actions={add} />
      <DataTable
        caption="Print presets"
        captionHidden
        columns={columns}
        rows={rows}
        rowKey={(row) => row.id}
        rowHref={mayWrite ? (row) => href("/shop/presets/:presetId", { presetId: row.id }) : undefined}
        searchLabel="Find a preset"
        filters={<AsideFilter />}
        defaultSort="name"
        total={total}
        pageSize={loaderData.pageSize}
        csvHref={href("/shop/presets.csv")}
        empty={{ text: "No print presets.", action: add }}
      />
    </ShopSheet>
  );
}
