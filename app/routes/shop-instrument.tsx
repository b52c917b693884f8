import { href, redirect } from "react-router";
import { z } from "zod";
import { AsideForm } from "#app/components/aside-form.tsx";
import { DateField, LengthField, RadioRow, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { lengthEntry } from "#app/components/measure-text.ts";
import { Section, SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { trustWords } from "#app/components/trust-words.ts";
import { findInstrument, type InstrumentValues } from "#app/data/instruments.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { day, length, words } from "#app/http/fields.server.ts";
import { parseForm, type LengthUnit } from "#app/http/form.server.ts";
import { mistaken, overtaken, readExisting } from "#app/http/refusals.server.ts";
import { checkInstrument, putEquipmentAside, saveInstrument } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-instrument.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.instrument?.name ?? "New instrument"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ instrument }) => [{ label: "Instruments", to: href("/shop/instruments") }, { label: instrument?.name ?? "New instrument" }],
};

const todayUtc = () => new Date().toISOString().slice(0, 10);

/** /shop/instruments/new and /shop/instruments/:instrumentId. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:write");
  const found = params.instrumentId ? orNotFound(await inShop(viewer, (tx) => findInstrument(tx, idParam(params.instrumentId)))) : null;
  const today = todayUtc();
  return { instrument: found && { ...found, words: trustWords(found, today) }, today, owner: can(viewer.roles, "shop:manage") };
}

const gone = z.unknown().optional().transform(() => null);

/** Only what the chosen trust rests on is judged and kept. */
const instrumentForm = (trust: FormDataEntryValue | null) => (units: LengthUnit) =>
  z.object({
    name: words("Give the instrument a name", 120),
    kind: words("Say what kind it is", 60),
    resolutionMm: length(units, "Give the smallest step it shows", { above: 0, max: 10 }),
    uncertaintyMm: length(units, "Give the uncertainty, as a half width", { above: 0, max: 10 }),
    trust: z.enum(["calibrated", "checked", "unverified"], { error: "Say how it is trusted" }),
    calibratedUntil: trust === "calibrated" ? day("Give the last day of the calibration") : gone,
    checkedOn: trust === "checked" ? day("Give the day of the check") : gone,
    checkedWith: trust === "checked" ? words("Say on what, such as gauge block 25 mm", 120) : z.unknown().optional().transform(() => ""),
  });

const checkForm = z.object({ with: words("Say on what, such as gauge block 25 mm", 120) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "equipment:write");
  const id = params.instrumentId === undefined ? null : idParam(params.instrumentId);
  const form = await request.formData();
  const intent = form.get("intent");
  if (id && (intent === "set-aside" || intent === "take-up")) {
    await inShop(viewer, (tx) => putEquipmentAside(tx, viewer, "instruments", id, intent === "set-aside"));
    return redirect(href("/shop/instruments"));
  }
  if (id && intent === "check") {
    const check = parseForm(checkForm, form);
    if (!check.ok) return mistaken(check);
    await inShop(viewer, (tx) => checkInstrument(tx, viewer, id, check.value.with, todayUtc()));
    return redirect(href("/shop/instruments"));
  }
  const read = parseForm(instrumentForm(form.get("trust")), form);
  if (!read.ok) return mistaken(read);
  const saved = await inShop(viewer, (tx) => saveInstrument(tx, viewer, readExisting(id, form), read.value));
  if (saved.ok) return redirect(href("/shop/instruments"));
  const units = form.get("units") === "in" ? "in" : "mm";
  return overtaken(form, { labels, yours: entryTexts(read.value, units), theirs: entryTexts(saved.current, units), rowVersion: saved.current.rowVersion });
}

const entryTexts = (values: InstrumentValues, units: LengthUnit) => ({
  name: values.name,
  kind: values.kind,
  resolutionMm: lengthEntry(values.resolutionMm, units),
  uncertaintyMm: lengthEntry(values.uncertaintyMm, units),
  trust: values.trust,
  calibratedUntil: values.calibratedUntil ?? "",
  checkedOn: values.checkedOn ?? "",
  checkedWith: values.checkedWith,
});

const labels = { name: "Instrument", kind: "Kind", resolutionMm: "Resolution", uncertaintyMm: "Uncertainty U", trust: "Trust", calibratedUntil: "Calibrated until", checkedOn: "Checked on", checkedWith: "Checked with" };
const trusts = [
  { value: "calibrated", label: "calibrated" },
  { value: "checked", label: "checked on a gauge block or ring" },
  { value: "unverified", label: "unverified" },
];

export default function ShopInstrumentPage({ loaderData, actionData }: Route.ComponentProps) {
  const { instrument, today, owner } = loaderData;
  const checking = actionData?.values.intent === "check";
  const saving = checking ? undefined : actionData;
  return (
    <ShopSheet owner={owner}>
      <SheetHeading title={instrument ? instrument.name : "Add an instrument"} lead={instrument?.setAside ? "Set aside: kept for its readings, not offered for new ones." : instrument?.words} />
      <div className="max-w-3xl">
        {instrument && !instrument.setAside && (
          <Section title="Checked just now?" lead="A check on a gauge block or ring counts for today.">
            <EntryForm intent="check" errors={checking ? actionData?.errors : undefined} values={checking ? actionData?.values : undefined}>
              <FieldGroup>
                <TextField name="with" label="On" defaultValue={instrument.checkedWith} placeholder="gauge block 25 mm" />
              </FieldGroup>
              <SubmitButton>It is right today</SubmitButton>
            </EntryForm>
          </Section>
        )}
        <Section title={instrument ? "What it is" : "About it"} ruled={Boolean(instrument)}>
          {saving?.conflict && <ConflictNotice changes={saving.conflict} />}
          <EntryForm errors={saving?.errors} values={saving?.values} labels={labels} intent="save" className="group/trust">
            {instrument && <RowVersion value={saving?.rowVersion ?? instrument.rowVersion} />}
            <FieldGroup columns={2}>
              <TextField name="name" label={labels.name} defaultValue={instrument?.name} placeholder="Caliper 150" />
              <TextField name="kind" label={labels.kind} defaultValue={instrument?.kind} suggestions={["caliper", "micrometer", "bore gauge", "depth gauge", "height gauge", "gauge pins", "dial indicator", "measuring machine"]} />
              <LengthField name="resolutionMm" label={labels.resolutionMm} defaultMm={instrument?.resolutionMm} hint="The smallest step it shows." />
              <LengthField name="uncertaintyMm" label={labels.uncertaintyMm} defaultMm={instrument?.uncertaintyMm} hint="± half width at about 95 %, with your hands in it." />
              <RadioRow name="trust" label={labels.trust} options={trusts} defaultValue={instrument?.trust ?? "unverified"} wide />
              <div className="hidden group-has-[[value=calibrated]:checked]/trust:contents">
                <DateField name="calibratedUntil" label={labels.calibratedUntil} defaultValue={instrument?.calibratedUntil} />
              </div>
              <div className="hidden group-has-[[value=checked]:checked]/trust:contents">
                <DateField name="checkedOn" label={labels.checkedOn} defaultValue={instrument?.checkedOn ?? today} max={today} />
                <TextField name="checkedWith" label={labels.checkedWith} defaultValue={instrument?.checkedWith} placeholder="gauge block 25 mm" />
              </div>
            </FieldGroup>
            <SubmitButton weight={instrument ? "secondary" : "primary"}>{instrument ? "Save" : "Add the instrument"}</SubmitButton>
          </EntryForm>
        </Section>
        {instrument && <AsideForm setAside={instrument.setAside} />}
      </div>
    </ShopSheet>
  );
}
