import { href, Link } from "react-router";
import { CsvLink } from "#app/components/csv-link.tsx";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findCustomer } from "#app/data/customers.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { listMatingParts, type MatingPart } from "#app/data/mating-parts.server.ts";
import { listPartsWithLatest, type PartOnJob } from "#app/data/parts.server.ts";
import { listPayments } from "#app/data/payments.server.ts";
import { findShop } from "#app/data/shops.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { seesOnlyShared } from "#app/data/shared.server.ts";
import { formatMoney } from "#app/domain/money.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/job.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.job.number} ${loaderData?.job.title} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ job }) => [{ label: "Jobs", to: "/jobs" }, { label: `${job.number} ${job.title}` }] };

/** A job as the shop sees it. What a role may not see is left out here, not hidden below. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "job:read");
  const may = (action: Parameters<typeof can>[1]) => can(viewer.roles, action);
  return inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, idParam(params.jobId)));
    const shop = orNotFound(await findShop(tx));
    const customer = may("customer:read") ? await findCustomer(tx, job.customerId) : undefined;
    const payments = may("deposit:read") ? await listPayments(tx, job.id) : [];
    const paid = payments.reduce((sum, payment) => sum + payment.amountMinor, 0);
    return {
      job: { id: job.id, number: job.number, title: job.title, dueOn: job.dueOn, promise: job.promise, setAside: job.setAside },
      customer: customer ? { name: customer.name, email: customer.email, phone: customer.phone, id: customer.id } : null,
      deposit: may("deposit:read") ? { agreed: job.depositAgreedMinor === null ? null : formatMoney(job.depositAgreedMinor, shop.currency), paid: formatMoney(paid, shop.currency), noneReason: job.depositNoneReason, count: payments.length } : null,
      parts: (await listPartsWithLatest(tx, job.id, { onlyShared: seesOnlyShared(viewer) })).map(toRow),
      matingParts: may("mating-part:read") ? await listMatingParts(tx, job.id) : [],
      mayWrite: may("job:write"),
      mayRecordDeposit: may("deposit:record"),
      mayShare: may("guest-link:manage"),
      seesHardware: may("mating-part:read"),
    };
  });
}

const toRow = ({ id, number, name, materialName, quantity, latestRevisionId, latestOrdinal, letter, setAside }: PartOnJob) => ({ id, number, name, materialName, quantity, latestRevisionId, latestOrdinal, letter, setAside });

const partColumns: Column<ReturnType<typeof toRow>>[] = [
  { key: "number", label: "Number", cell: (row) => row.number },
  { key: "name", label: "Part", cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "material", label: "Stock", cell: (row) => row.materialName ?? "not chosen" },
  { key: "quantity", label: "Pieces", align: "number", cell: (row) => row.quantity },
  { key: "revision", label: "Revision", align: "number", cell: (row) => (row.latestOrdinal === null ? "none yet" : `${row.latestOrdinal}${row.letter ? `, released as ${row.letter}` : ""}`) },
];

const matingColumns: Column<MatingPart>[] = [
  { key: "name", label: "Hardware", cell: (row) => (row.setAside ? `${row.name} (set aside)` : row.name) },
  { key: "in", label: "Came in", cell: (row) => (row.cameInOn ? <Day at={row.cameInOn} /> : "not here") },
  { key: "out", label: "Went out", cell: (row) => (row.wentOutOn ? <Day at={row.wentOutOn} /> : "") },
  { key: "measured", label: "Measured", align: "number", cell: (row) => `${row.measurements}` },
];

export default function JobPage({ loaderData }: Route.ComponentProps) {
  const { job, customer, deposit, parts, matingParts, mayWrite } = loaderData;
  const params = { jobId: job.id };
  useLive(job.id);
  return (
    <Sheet
      rightLabel="About the job"
      right={
        <>
          <Section title="About the job" actions={mayWrite ? <Link className="word" to={href("/jobs/:jobId/edit", params)}>Change</Link> : undefined}>
            <Facts
              facts={[
                ...(customer ? [{ label: "Customer", value: <Link className="word" to={href("/customers/:customerId", { customerId: customer.id })}>{customer.name}</Link> }] : []),
                ...(customer?.phone ? [{ label: "Phone", value: customer.phone }] : []),
                { label: "Due", value: job.dueOn ? <Day at={job.dueOn} /> : "no date" },
              ]}
            />
          </Section>
          {deposit && (
            <Section title="Deposit" ruled actions={loaderData.mayRecordDeposit ? <Link className="word" to={href("/jobs/:jobId/deposit", params)}>Record</Link> : undefined}>
              <Facts facts={deposit.noneReason ? [{ label: "None asked", value: deposit.noneReason }] : [{ label: "Agreed", value: deposit.agreed ?? "not yet" }, { label: "Paid", value: deposit.paid }]} />
            </Section>
          )}
          {loaderData.mayShare && (
            <Section title="Who may look" ruled actions={<Link className="word" to={href("/jobs/:jobId/access", params)}>Open</Link>}>
              <p className="text-soft">Links for the customer and the machine shop, and who has used them.</p>
            </Section>
          )}
        </>
      }
    >
      <SheetHeading title={job.title} lead={job.setAside ? "Set aside." : undefined} />
      {job.promise && (
        <p className="mb-7 max-w-prose border-l-[1.5px] border-ink pl-4">
          <span className="block font-label text-label text-soft">Promised</span>
          {job.promise}
        </p>
      )}
      <Section title="Parts" actions={
          <span className="flex flex-wrap items-center gap-x-6">
            {parts.length > 0 && <CsvLink href={href("/jobs/:jobId/parts.csv", params)} what="the parts" />}
            {mayWrite && <LinkButton to={href("/jobs/:jobId/parts/new", params)} weight="primary">Add a part</LinkButton>}
          </span>
        }
      >
        <DataTable caption="Parts" captionHidden columns={partColumns} rows={parts} rowKey={(row) => row.id} rowHref={(row) => (row.latestRevisionId ? href("/revisions/:revisionId", { revisionId: row.latestRevisionId }) : href("/parts/:partId", { partId: row.id }))} empty={{ text: "No part yet. Drop its STEP, or begin from a kit." }} />
      </Section>
      {loaderData.seesHardware && (
        <Section title="The customer's hardware" actions={mayWrite ? <LinkButton to={href("/jobs/:jobId/mating-parts/new", params)}>Take in hardware</LinkButton> : undefined}>
          <DataTable caption="Mating parts" captionHidden columns={matingColumns} rows={matingParts} rowKey={(row) => row.id} rowHref={(row) => href("/mating-parts/:matingPartId", { matingPartId: row.id })} empty={{ text: "Nothing was taken in yet. Prints are tried on it." }} />
        </Section>
      )}
    </Sheet>
  );
}
