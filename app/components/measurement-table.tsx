import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Day } from "#app/components/day.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { Length } from "#app/components/measure.tsx";

export interface MeasurementView {
  id: string;
  name: string;
  valueMm: number;
  instrument: string | null;
  uncertaintyMm: number | null;
  note: string;
  measuredOn: string;
  measuredBy: string | null;
  setAside: boolean;
}

const columns: Column<MeasurementView>[] = [
  {
    key: "name",
    label: "What",
    cell: (row) => (
      <>
        {row.name}
        {row.setAside && " (set aside)"}
        {row.note && <span className="block font-normal text-soft">{row.note}</span>}
      </>
    ),
  },
  { key: "value", label: "Reading", align: "number", cell: (row) => <span className={row.setAside ? "line-through" : ""}><Length mm={row.valueMm} /></span> },
  { key: "u", label: "Uncertainty", align: "number", cell: (row) => (row.uncertaintyMm === null ? <span className="text-soft">not known</span> : <>± <Length mm={row.uncertaintyMm} /></>) },
  { key: "with", label: "With", cell: (row) => row.instrument ?? "" },
  { key: "by", label: "By", cell: (row) => <>{row.measuredBy ? `${row.measuredBy}, ` : ""}<Day at={row.measuredOn} /></> },
];

/** What was measured, newest last; a wrong reading stays, struck through. */
export function MeasurementTable({ rows, mayWrite }: { rows: MeasurementView[]; mayWrite: boolean }) {
  const aside: Column<MeasurementView> = {
    key: "aside",
    label: "If wrong",
    cell: (row) => (
      <EntryForm intent={row.setAside ? "take-up" : "set-aside"} preventScrollReset>
        <input type="hidden" name="id" value={row.id} />
        <SubmitButton weight="quiet">
          {row.setAside ? "Take up again" : "Set aside"}
          <span className="sr-only">: {row.name}</span>
        </SubmitButton>
      </EntryForm>
    ),
  };
  return (
    <DataTable
      caption="Measurements"
      captionHidden
      columns={mayWrite ? [...columns, aside] : columns}
      rows={rows}
      rowKey={(row) => row.id}
      empty={{ text: "Nothing was measured yet." }}
    />
  );
}
