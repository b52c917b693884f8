import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideForm } from "#app/components/aside-form.tsx";
import { LengthField, NumberField, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { lengthEntry } from "#app/components/measure-text.ts";
import { Notice } from "#app/components/notice.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { findPreset, listPrinterNames, type PresetValues } from "#app/data/printers.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosen, length, number, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm, type LengthUnit } from "#app/http/form.server.ts";
import { mistaken, overtaken, readExisting, typedValues } from "#app/http/refusals.server.ts";
import { putEquipmentAside, savePreset } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-preset.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.preset?.name ?? "New print preset"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ preset }) => [{ label: "Print presets", to: href("/shop/presets") }, { label: preset?.name ?? "New print preset" }],
};

/** /shop/presets/new and /shop/presets/:presetId. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:write");
  return inShop(viewer, async (tx) => {
    const preset = params.presetId ? orNotFound(await findPreset(tx, idParam(params.presetId))) : null;
    const printers = (await listPrinterNames(tx)).map(({ id, name }) => ({ value: id, label: name }));
    // A printer that was set aside meanwhile is still this preset's printer.
    if (preset && !printers.some(({ value }) => value === preset.printerId)) printers.push({ value: preset.printerId, label: `${preset.printerName} (set aside)` });
    return { preset, printers, owner: can(viewer.roles, "shop:manage") };
  });
}

const scale = number("Give the factor, 1 for as modelled", { min: 0.5, max: 2 });
const presetForm = (units: LengthUnit) =>
  z.object({
    name: words("Give the preset a name", 120),
    printerId: chosen("Pick the printer"),
    material: words("Say what it prints in", 80),
    layerMm: length(units, "Give the layer height", { above: 0, max: 5 }),
    walls: number("Say how many walls", { min: 1, max: 100, whole: true }),
    infillPct: number("Give the infill", { min: 0, max: 100 }),
    scaleX: scale,
    scaleY: scale,
    scaleZ: scale,
    note: wordsOrNone(1000),
  });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const id = params.presetId === undefined ? null : idParam(params.presetId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (id && (intent === "set-aside" || intent === "take-up")) {
    await inShop(viewer, (tx) => putEquipmentAside(tx, viewer, "print_presets", id, intent === "set-aside"));
    return redirect(href("/shop/presets"));
  }
  const read = parseForm(presetForm, form);
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => savePreset(tx, viewer, readExisting(id, form), read.value));
  if (saved.ok) return redirect(href("/shop/presets"));
  if (saved.reason === "no-such-printer") return mistaken({ errors: { printerId: ["Pick the printer"] }, values: typedValues(form) });
  const units = form.get("units") === "in" ? "in" : "mm";
  const printers = await inShop(viewer, listPrinterNames);
  const nameOf = (printerId: string) => (printerId === saved.current.printerId ? saved.current.printerName : (printers.find((one) => one.id === printerId)?.name ?? ""));
  const shown = (values: PresetValues) => entryTexts(values, units, nameOf);
  return overtaken(form, { labels, yours: shown(read.value), theirs: shown(saved.current), rowVersion: saved.current.rowVersion });
}

const entryTexts = (values: PresetValues, units: LengthUnit, printerName: (id: string) => string) => ({
  name: values.name,
  printerId: printerName(values.printerId),
  material: values.material,
  layerMm: lengthEntry(values.layerMm, units),
  walls: String(values.walls),
  infillPct: String(values.infillPct),
  scaleX: String(values.scaleX),
  scaleY: String(values.scaleY),
  scaleZ: String(values.scaleZ),
  note: values.note,
});

const labels = { name: "Preset", printerId: "Printer", material: "Material", layerMm: "Layer", walls: "Walls", infillPct: "Infill", scaleX: "Scale in x", scaleY: "Scale in y", scaleZ: "Scale in z", note: "Note" };

export default function ShopPresetPage({ loaderData, actionData }: Route.ComponentProps) {
  const { preset, printers, owner } = loaderData;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title={preset ? preset.name : "Add a print preset"} lead={preset?.setAside ? "Set aside: not offered for new prints." : preset ? "Prints made with it keep the settings of their day." : undefined} />
      <div className="max-w-3xl">
        {printers.length === 0 && (
          <Notice kind="info" action={<LinkButton to={href("/shop/printers/new")}>Add a printer</LinkButton>}>
            A preset belongs to a printer, and there is none yet.
          </Notice>
        )}
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {preset && <RowVersion value={actionData?.rowVersion ?? preset.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={preset?.name} />
            <SelectField name="printerId" label={labels.printerId} prompt="Pick one" defaultValue={preset?.printerId ?? (printers.length === 1 ? printers[0]!.value : null)} options={printers} />
            <TextField name="material" label={labels.material} defaultValue={preset?.material} suggestions={["PLA", "PETG", "ABS", "ASA", "PA12", "PA12-CF", "resin"]} />
            <LengthField name="layerMm" label={labels.layerMm} defaultMm={preset?.layerMm} />
            <NumberField name="walls" label={labels.walls} defaultValue={preset?.walls} />
            <NumberField name="infillPct" label={labels.infillPct} unit="%" defaultValue={preset?.infillPct} />
          </FieldGroup>
          <FieldGroup legend="Scale" hint="What the model is multiplied by before printing, so that the print comes out at size. 1 is as modelled; 1.004 makes it 0.4 % larger." columns={3}>
            <NumberField name="scaleX" label={labels.scaleX} defaultValue={preset?.scaleX ?? 1} />
            <NumberField name="scaleY" label={labels.scaleY} defaultValue={preset?.scaleY ?? 1} />
            <NumberField name="scaleZ" label={labels.scaleZ} defaultValue={preset?.scaleZ ?? 1} />
          </FieldGroup>
          <FieldGroup>
            <TextArea name="note" label={labels.note} optional defaultValue={preset?.note} rows={2} />
          </FieldGroup>
          <SubmitButton>{preset ? "Save" : "Add the preset"}</SubmitButton>
        </EntryForm>
        {preset && <AsideForm setAside={preset.setAside} />}
      </div>
    </ShopSheet>
  );
}
