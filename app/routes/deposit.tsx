import { data, href, redirect } from "react-router";
import { z } from "zod";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { DateField, RadioRow, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findJob, type Job } from "#app/data/jobs.server.ts";
import { listPayments } from "#app/data/payments.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { conflictsBetween } from "#app/domain/conflicts.ts";
import { amountText, depositStanding, formatMoney, sumMoney } from "#app/domain/money.ts";
import { requireCan } from "#app/http/context.server.ts";
import { amount, day, rowVersion, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm, type FieldErrors } from "#app/http/form.server.ts";
import { typedValues } from "#app/http/refusals.server.ts";
import { agreeDeposit, recordPayment } from "#app/services/deposit.server.ts";
import type { Route } from "./+types/deposit.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Deposit of ${loaderData?.job.number} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job }) => [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: "Deposit" }],
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "deposit:record");
  return inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, idParam(params.jobId)));
    const { currency } = orNotFound(await findShop(tx));
    const payments = await listPayments(tx, job.id);
    const agreed = job.depositAgreedMinor;
    const standing = agreed === null ? null : depositStanding({ amount_minor: agreed, currency }, payments.map(({ amountMinor }) => ({ amount_minor: amountMinor, currency })));
    return {
      job: { id: job.id, number: job.number, title: job.title, rowVersion: job.rowVersion },
      currency,
      agreement: { kind: kindOf(job), amount: agreed === null ? "" : amountText(agreed, currency), reason: job.depositNoneReason ?? "" },
      sentence: sentenceOf(job, currency, standing?.left_minor ?? null),
      paid: formatMoney(sumMoney(payments.map(({ amountMinor }) => amountMinor)), currency),
      payments: payments.map(({ amountMinor, ...payment }) => ({ ...payment, amount: formatMoney(amountMinor, currency) })),
      today: new Date().toISOString().slice(0, 10),
    };
  });
}

const kindOf = (job: Job) => (job.depositNoneReason !== null ? "none" : job.depositAgreedMinor !== null ? "agreed" : "open");

function sentenceOf(job: Job, currency: string, leftMinor: number | null): string {
  if (job.depositNoneReason !== null) return "No deposit is asked.";
  if (job.depositAgreedMinor === null || leftMinor === null) return "No deposit is agreed yet.";
  const agreed = formatMoney(job.depositAgreedMinor, currency);
  return leftMinor === 0 ? `The deposit of ${agreed} is paid.` : `${formatMoney(leftMinor, currency)} of the deposit of ${agreed} is still to come.`;
}

const agreementForm = (currency: string) => (kind: FormDataEntryValue | null) =>
  z.object({
    kind: z.enum(["agreed", "none", "open"], { error: "Say what was agreed" }),
    amount: kind === "agreed" ? amount(currency, "Give the amount") : z.unknown().optional().transform(() => null),
    reason: kind === "none" ? words("Say why none is asked", 500) : z.unknown().optional().transform(() => null),
    rowVersion,
  });

const paymentForm = (currency: string) => z.object({ amount: amount(currency, "Give the amount", { signed: true }), paidOn: day("Give the day"), how: words("Say how it was paid", 80), note: wordsOrNone(500), confirmed: z.string().default("") });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "deposit:record");
  const jobId = idParam(params.jobId);
  const form = await request.formData();
  const { currency } = orNotFound(await inShop(viewer, findShop));
  const here = href("/jobs/:jobId/deposit", { jobId });
  const intent = form.get("intent") === "agree" ? ("agree" as const) : ("pay" as const);
  const back = (status: 400 | 409, errors: FieldErrors, more: { conflict?: ReturnType<typeof conflictsBetween>; rowVersion?: number; confirm?: string } = {}) =>
    data({ intent, errors, values: { ...typedValues(form), ...(more.rowVersion ? { rowVersion: String(more.rowVersion) } : {}) } as Record<string, string>, conflict: more.conflict ?? null, rowVersion: more.rowVersion ?? null, confirm: more.confirm ?? null }, { status });

  if (intent === "agree") {
    const read = parseForm(agreementForm(currency)(form.get("kind")), form);
    if (!read.ok) return back(400, read.errors);
    const agreed = { depositAgreedMinor: read.value.amount, depositNoneReason: read.value.reason };
    const saved = await inShop(viewer, (tx) => agreeDeposit(tx, viewer, jobId, read.value.rowVersion, agreed));
    if (saved.ok) return redirect(here);
    const shown = (job: Pick<Job, "depositAgreedMinor" | "depositNoneReason">) => ({ amount: job.depositAgreedMinor === null ? "" : formatMoney(job.depositAgreedMinor, currency), reason: job.depositNoneReason ?? "" });
    return back(409, {}, { conflict: conflictsBetween(labels, shown(agreed), shown(saved.current)), rowVersion: saved.current.rowVersion });
  }
  const read = parseForm(paymentForm(currency), form);
  if (!read.ok) return back(400, read.errors);
  const { amount: amountMinor, confirmed, ...payment } = read.value;
  if (amountMinor < 0 && confirmed !== String(amountMinor)) return back(409, {}, { confirm: String(amountMinor) });
  const recorded = await inShop(viewer, (tx) => recordPayment(tx, viewer, jobId, { ...payment, amountMinor }));
  if (recorded.ok) return redirect(here);
  return back(400, { amount: [`Only ${formatMoney(recorded.paidMinor, currency)} has come so far: no more can be given back`] });
}

const labels = { amount: "Amount", reason: "Why none is asked", paidOn: "On", how: "How", note: "Note" };

type Row = Route.ComponentProps["loaderData"]["payments"][number];

const columns: Column<Row>[] = [
  { key: "on", label: "On", cell: (row) => <Day at={row.paidOn} /> },
  { key: "amount", label: "Amount", align: "number", cell: (row) => row.amount },
  { key: "how", label: "How", cell: (row) => row.how },
  { key: "note", label: "Note", cell: (row) => row.note },
];

export default function DepositPage({ loaderData, actionData }: Route.ComponentProps) {
  const { job, agreement, currency } = loaderData;
  useLive(job.id);
  const of = (intent: "agree" | "pay") => (actionData?.intent === intent ? actionData : undefined);
  const agree = of("agree");
  const pay = of("pay");
  return (
    <Sheet>
      <SheetHeading title={loaderData.sentence} lead="Only owners see this page. The gate asks that the agreed deposit is paid, or why none is asked." />
      <div className="max-w-3xl">
        <Section title="What was agreed">
          {agree?.conflict && <ConflictNotice changes={agree.conflict} />}
          <EntryForm key={job.rowVersion} errors={agree?.errors} values={agree?.values} labels={labels} intent="agree" className="group/deposit">
            <RowVersion value={agree?.rowVersion ?? job.rowVersion} />
            <FieldGroup columns={2}>
              <RadioRow name="kind" label="A deposit is" defaultValue={agreement.kind} options={[{ value: "agreed", label: "agreed" }, { value: "none", label: "not asked" }, { value: "open", label: "not settled yet" }]} wide />
              <div className="hidden group-has-[[value=agreed]:checked]/deposit:contents">
                <TextField name="amount" label={`${labels.amount}, ${currency}`} inputMode="decimal" defaultValue={agreement.amount} />
              </div>
              <div className="hidden group-has-[[value=none]:checked]/deposit:contents">
                <TextArea name="reason" label={labels.reason} rows={2} defaultValue={agreement.reason} wide />
              </div>
            </FieldGroup>
            <SubmitButton weight="secondary">Save</SubmitButton>
          </EntryForm>
        </Section>
        <Section title="Payments" ruled lead={`Paid so far: ${loaderData.paid}.`}>
          <DataTable caption="Payments" captionHidden columns={columns} rows={loaderData.payments} rowKey={(row) => row.id} empty={{ text: "None yet." }} />
          {pay?.confirm && <Notice kind="info">This is money given back. Record it again to confirm, or change the amount.</Notice>}
          <EntryForm errors={pay?.errors} values={pay?.values} labels={labels} intent="pay" key={loaderData.payments.length} className="mt-5">
            {pay?.confirm && <input type="hidden" name="confirmed" value={pay.confirm} />}
            <FieldGroup columns={2}>
              <TextField name="amount" label={`${labels.amount}, ${currency}`} inputMode="text" hint="With a minus: given back." />
              <DateField name="paidOn" label={labels.paidOn} defaultValue={loaderData.today} max={loaderData.today} />
              <TextField name="how" label={labels.how} suggestions={["bank transfer", "cash", "cheque"]} />
              <TextField name="note" label={labels.note} optional />
            </FieldGroup>
            <SubmitButton pendingText="Recording">{pay?.confirm ? "Yes, record it as given back" : "Record the payment"}</SubmitButton>
          </EntryForm>
          <p className="mt-2 text-soft">A payment can't be changed. One that was wrong is undone by another with a minus.</p>
        </Section>
      </div>
    </Sheet>
  );
}
