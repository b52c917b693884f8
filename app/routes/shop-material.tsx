import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideForm } from "#app/components/aside-form.tsx";
import { NumberField, RadioRow, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { findMaterial, type MaterialValues } from "#app/data/materials.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { number, numberOrNull, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken, overtaken, readExisting, typedValues } from "#app/http/refusals.server.ts";
import { putEquipmentAside, saveMaterial } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-material.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.material?.code ?? "New material"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ material }) => [{ label: "Materials", to: href("/shop/materials") }, { label: material?.code ?? "New material" }],
};

/** /shop/materials/new and /shop/materials/:materialId. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:write");
  const material = params.materialId ? orNotFound(await inShop(viewer, (tx) => findMaterial(tx, idParam(params.materialId)))) : null;
  return { material, owner: can(viewer.roles, "shop:manage") };
}

// Bounds that only a slip of the unit passes: nothing a shop cuts is denser than 25 000 kg/m³ or stronger than 10 000 MPa.
const strength = numberOrNull({ above: 0, max: 10_000 });
const materialForm = z.object({
  code: words("Give it a code, such as 6061-T6", 60),
  name: words("Give the material a name", 120),
  densityKgM3: number("Give the density", { min: 10, max: 25_000 }),
  yieldMPa: strength,
  tensileMPa: strength,
  shearMPa: strength,
  typical: z.enum(["typical", "minimum"], { error: "Say what the values are" }).transform((kind) => kind === "typical"),
  source: wordsOrNone(500),
});

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const id = params.materialId === undefined ? null : idParam(params.materialId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (id && (intent === "set-aside" || intent === "take-up")) {
    await inShop(viewer, (tx) => putEquipmentAside(tx, viewer, "materials", id, intent === "set-aside"));
    return redirect(href("/shop/materials"));
  }
  const read = parseForm(materialForm, form);
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => saveMaterial(tx, viewer, readExisting(id, form), read.value));
  if (saved.ok) return redirect(href("/shop/materials"));
  if (saved.reason === "code-taken") return mistaken({ errors: { code: ["Another material goes by this code, perhaps one that was set aside"] }, values: typedValues(form) });
  return overtaken(form, { labels, yours: entryTexts(read.value), theirs: entryTexts(saved.current), rowVersion: saved.current.rowVersion });
}

const entryTexts = (values: MaterialValues) => ({
  code: values.code,
  name: values.name,
  densityKgM3: String(values.densityKgM3),
  yieldMPa: String(values.yieldMPa ?? ""),
  tensileMPa: String(values.tensileMPa ?? ""),
  shearMPa: String(values.shearMPa ?? ""),
  typical: values.typical ? "typical" : "minimums",
  source: values.source,
});

const labels = { code: "Code", name: "Material", densityKgM3: "Density", yieldMPa: "Yield strength", tensileMPa: "Tensile strength", shearMPa: "Shear strength", typical: "The values are", source: "Source" };

export default function ShopMaterialPage({ loaderData, actionData }: Route.ComponentProps) {
  const { material, owner } = loaderData;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title={material ? material.name : "Add a material"} lead={material?.setAside ? "Set aside: parts that name it keep it, new ones are not offered it." : undefined} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {material && <RowVersion value={actionData?.rowVersion ?? material.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="code" label={labels.code} defaultValue={material?.code} placeholder="6061-T6" />
            <TextField name="name" label={labels.name} defaultValue={material?.name} />
            <NumberField name="densityKgM3" label={labels.densityKgM3} unit="kg/m³" defaultValue={material?.densityKgM3} />
            <NumberField name="yieldMPa" label={labels.yieldMPa} unit="MPa" optional defaultValue={material?.yieldMPa} />
            <NumberField name="tensileMPa" label={labels.tensileMPa} unit="MPa" optional defaultValue={material?.tensileMPa} />
            <NumberField name="shearMPa" label={labels.shearMPa} unit="MPa" optional defaultValue={material?.shearMPa} />
            <RadioRow name="typical" label={labels.typical} defaultValue={material?.typical === false ? "minimum" : "typical"} options={[{ value: "typical", label: "typical" }, { value: "minimum", label: "minimums of a standard or certificate" }]} wide />
            <TextArea name="source" label={labels.source} optional defaultValue={material?.source} rows={2} hint="The standard, data sheet or certificate they are from." wide />
          </FieldGroup>
          <SubmitButton>{material ? "Save" : "Add the material"}</SubmitButton>
        </EntryForm>
        {material && <AsideForm setAside={material.setAside} />}
      </div>
    </ShopSheet>
  );
}
