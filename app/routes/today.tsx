import { href, Link } from "react-router";
import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { GateRow } from "#app/components/gate-marks.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { WaitItem, WaitList } from "#app/components/wait-list.tsx";
import { listLogbook } from "#app/data/logbook.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadToday, type MovingRevision } from "#app/services/today.server.ts";
import type { Route } from "./+types/today.ts";

export const meta: Route.MetaFunction = () => [{ title: "Today · Spotblue" }];

export async function loader({ context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "today:read");
  return inShop(viewer, async (tx) => ({
    ...(await loadToday(tx, viewer)),
    happened: can(viewer.roles, "logbook:read")
      ? (await listLogbook(tx, { q: "", sort: { key: "seq", descending: true }, page: 1 }, {})).rows.slice(0, 8).map(({ entry }) => ({ seq: entry.seq, at: entry.at, actor: entry.actor, action: entry.action }))
      : [],
  }));
}

const inWords = ["Nothing waits", "One thing waits", "Two things wait", "Three things wait", "Four things wait", "Five things wait", "Six things wait"];

const columns: Column<MovingRevision>[] = [
  { key: "part", label: "Part", cell: (row) => row.partName },
  { key: "revision", label: "Revision", align: "number", cell: (row) => row.ordinal },
  { key: "gate", label: "Gate", cell: (row) => <GateRow lines={row.marks} /> },
  { key: "who", label: "Who has it", cell: (row) => row.who },
  { key: "due", label: "Due", align: "number", cell: (row) => (row.dueOn ? <Day at={row.dueOn} year={false} /> : "") },
];

export default function TodayPage({ loaderData }: Route.ComponentProps) {
  const { waiting, moving, happened } = loaderData;
  return (
    <Sheet
      rightLabel="Logbook"
      right={
        happened.length > 0 ? (
          <Section title="Logbook" actions={<Link className="word" to={href("/logbook")}>All of it</Link>}>
            <ul className="grid gap-2">
              {happened.map(({ seq, at, actor, action }) => (
                <li key={seq} className="text-soft">
                  <Day at={at} time year={false} /> <span className="text-ink">{actor}</span> {action}
                </li>
              ))}
            </ul>
          </Section>
        ) : undefined
      }
    >
      <SheetHeading title={`${inWords[waiting.length] ?? `${waiting.length} things wait`} on you`} />
      {waiting.length > 0 && (
        <WaitList>
          {waiting.map((one) => (
            <WaitItem
              key={one.key}
              title={one.title}
              text={one.text}
              since={<Day at={one.since} />}
              picture={one.fileId ? <img src={href("/files/:fileId/:kind", { fileId: one.fileId, kind: "thumbnail" })} alt="" className="h-auto w-full" /> : undefined}
              marks={one.marks ? <GateRow lines={one.marks} /> : undefined}
              action={<LinkButton to={one.action.to} weight="primary">{one.action.label}</LinkButton>}
            />
          ))}
        </WaitList>
      )}
      {moving.length > 0 && (
        <Section title="Moving without you">
          <DataTable caption="Moving without you" captionHidden columns={columns} rows={moving} rowKey={(row) => row.revisionId} rowHref={(row) => href("/revisions/:revisionId", { revisionId: row.revisionId })} empty={{ text: "" }} />
        </Section>
      )}
    </Sheet>
  );
}
