import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideForm } from "#app/components/aside-form.tsx";
import { TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { findPrinter, type PrinterValues } from "#app/data/printers.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken, overtaken, readExisting } from "#app/http/refusals.server.ts";
import { putEquipmentAside, savePrinter } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-printer.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.printer?.name ?? "New printer"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ printer }) => [{ label: "Printers", to: href("/shop/printers") }, { label: printer?.name ?? "New printer" }],
};

/** /shop/printers/new and /shop/printers/:printerId. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:write");
  const printer = params.printerId ? orNotFound(await inShop(viewer, (tx) => findPrinter(tx, idParam(params.printerId)))) : null;
  return { printer, owner: can(viewer.roles, "shop:manage") };
}

const printerForm = z.object({ name: words("Give the printer a name", 120), process: words("Say how it prints", 80), bedMm: wordsOrNone(60) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const id = params.printerId === undefined ? null : idParam(params.printerId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (id && (intent === "set-aside" || intent === "take-up")) {
    await inShop(viewer, (tx) => putEquipmentAside(tx, viewer, "printers", id, intent === "set-aside"));
    return redirect(href("/shop/printers"));
  }
  const read = parseForm(printerForm, form);
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => savePrinter(tx, viewer, readExisting(id, form), read.value));
  if (saved.ok) return redirect(href("/shop/printers"));
  const shown = ({ name, process, bedMm }: PrinterValues) => ({ name, process, bedMm });
  return overtaken(form, { labels, yours: shown(read.value), theirs: shown(saved.current), rowVersion: saved.current.rowVersion });
}

const labels = { name: "Printer", process: "Process", bedMm: "Room, in mm" };

export default function ShopPrinterPage({ loaderData, actionData }: Route.ComponentProps) {
  const { printer, owner } = loaderData;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title={printer ? printer.name : "Add a printer"} lead={printer?.setAside ? "Set aside: its presets stay as they are." : undefined} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {printer && <RowVersion value={actionData?.rowVersion ?? printer.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={printer?.name} wide />
            <TextField name="process" label={labels.process} defaultValue={printer?.process} suggestions={["filament", "resin", "laser-sintered powder"]} />
            <TextField name="bedMm" label={labels.bedMm} optional defaultValue={printer?.bedMm} placeholder="220 × 220 × 250" />
          </FieldGroup>
          <SubmitButton>{printer ? "Save" : "Add the printer"}</SubmitButton>
        </EntryForm>
        {printer && <AsideForm setAside={printer.setAside} />}
      </div>
    </ShopSheet>
  );
}
