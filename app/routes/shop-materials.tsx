import { href } from "react-router";
import { AsideFilter } from "#app/components/aside-filter.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Num } from "#app/components/measure.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { readListRequest } from "#app/components/table-query.ts";
import { pageSize } from "#app/data/list.server.ts";
import { listMaterials, materialSorts, type Material } from "#app/data/materials.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/shop-materials.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Materials · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Materials" }] };

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const page = await inShop(viewer, (tx) => listMaterials(tx, readListRequest(request, materialSorts)));
  return { ...page, pageSize, mayWrite: can(viewer.roles, "equipment:write"), owner: can(viewer.roles, "shop:manage") };
}

const strength = (value: number | null) => (value === null ? <span className="text-soft">not known</span> : <Num value={value} unit="MPa" />);

const columns: Column<Material>[] = [
  { key: "code", label: "Code", sortable: true, cell: (row) => (row.setAside ? `${row.code} (set aside)` : row.code) },
  { key: "name", label: "Material", sortable: true, cell: (row) => row.name },
  { key: "density", label: "Density", sortable: true, align: "number", cell: (row) => <Num value={row.densityKgM3} unit="kg/m³" /> },
  { key: "yield", label: "Yield", sortable: true, align: "number", cell: (row) => strength(row.yieldMPa) },
  { key: "tensile", label: "Tensile", sortable: true, align: "number", cell: (row) => strength(row.tensileMPa) },
  { key: "shear", label: "Shear", sortable: true, align: "number", cell: (row) => strength(row.shearMPa) },
  { key: "typical", label: "Values are", cell: (row) => (row.typical ? "typical" : "minimums") },
];

export default function ShopMaterialsPage({ loaderData }: Route.ComponentProps) {
  const { rows, total, mayWrite, owner } = loaderData;
  const add = mayWrite ? <LinkButton to={href("/shop/materials/new")} weight="primary">Add a material</LinkButton> : undefined;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title="Materials" lead="For weight and comparison. Strength-critical parts need the mill certificate of their own stock." actions={add} />
      <DataTable
        caption="Materials"
        captionHidden
        columns={columns}
        rows={rows}
        rowKey={(row) => row.id}
        rowHref={mayWrite ? (row) => href("/shop/materials/:materialId", { materialId: row.id }) : undefined}
        searchLabel="Find a material"
        filters={<AsideFilter />}
        defaultSort="code"
        total={total}
        pageSize={loaderData.pageSize}
        csvHref={href("/shop/materials.csv")}
        empty={{ text: "No materials. A part's weight follows from its stock.", action: add }}
      />
    </ShopSheet>
  );
}
