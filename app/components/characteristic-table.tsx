import { href } from "react-router";
import { DataTable, type Column, type DataTableProps } from "#app/components/data-table.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { Limits } from "#app/components/limits.tsx";
import { Length } from "#app/components/measure.tsx";

export interface CharacteristicView {
  id: string;
  name: string;
  kind: "limits" | "fit" | "min" | "max" | "yes-no";
  nominalMm: number | null;
  lowerMm: number | null;
  upperMm: number | null;
  fitClass: string | null;
  printLowerMm: number | null;
  printUpperMm: number | null;
  question: string;
  method: string;
  places: number;
  required: boolean;
  critical: boolean;
  photoRequired: boolean;
  provableOnPrint: boolean;
  setAside: boolean;
  matingPartName: string | null;
}

/** What makes a characteristic special, in words. */
export function characteristicMarks(row: Pick<CharacteristicView, "required" | "critical" | "photoRequired" | "setAside">): string {
  if (row.setAside) return "set aside";
  return [row.required ? "required" : "for information", row.critical ? "critical" : "", row.photoRequired ? "with photo" : ""].filter(Boolean).join(", ");
}

const columns: Column<CharacteristicView>[] = [
  {
    key: "name",
    label: "Characteristic",
    cell: (row) => (
      <>
        {row.name}
        {row.kind === "yes-no" && <span className="block font-normal text-soft">{row.question}</span>}
      </>
    ),
  },
  { key: "final", label: "On the cut part", cell: (row) => <FinalLimits row={row} /> },
  { key: "print", label: "On the print", cell: (row) => <PrintLimits row={row} /> },
  { key: "how", label: "How", cell: (row) => [row.method, row.places > 1 ? `${row.places} places` : "", row.matingPartName ? `on ${row.matingPartName}` : ""].filter(Boolean).join(", ") || <span className="text-soft">not said</span> },
  { key: "marks", label: "Counts as", cell: characteristicMarks },
];

function FinalLimits({ row }: { row: CharacteristicView }) {
  if (row.kind === "yes-no") return "yes";
  return (
    <>
      {row.fitClass && row.nominalMm !== null && (
        <span className="whitespace-nowrap">
          <Length mm={row.nominalMm} bare /> {row.fitClass},{" "}
        </span>
      )}
      <Limits lower={row.lowerMm} upper={row.upperMm} />
    </>
  );
}

function PrintLimits({ row }: { row: CharacteristicView }) {
  if (!row.provableOnPrint) return <span className="text-soft">a print can't show it</span>;
  return row.kind === "yes-no" ? "yes" : <Limits lower={row.printLowerMm} upper={row.printUpperMm} />;
}

export interface CharacteristicTableProps {
  rows: CharacteristicView[];
  /** The viewer may change them and put them in order. */
  mayWrite: boolean;
  empty: DataTableProps<CharacteristicView>["empty"];
}

/** Characteristics in the order in which they are tried, print limits beside final limits. */
export function CharacteristicTable({ rows, mayWrite, empty }: CharacteristicTableProps) {
  const ordered = rows.filter(({ setAside }) => !setAside);
  const order: Column<CharacteristicView> = {
    key: "order",
    label: "Order",
    cell: (row) => {
      const at = ordered.indexOf(row);
      return at < 0 ? null : (
        <span className="relative z-10 inline-flex gap-4">
          {at > 0 && <Move id={row.id} intent="earlier" what={row.name} />}
          {at < ordered.length - 1 && <Move id={row.id} intent="later" what={row.name} />}
        </span>
      );
    },
  };
  return (
    <DataTable
      caption="Characteristics"
      captionHidden
      columns={mayWrite && ordered.length > 1 ? [...columns, order] : columns}
      rows={rows}
      rowKey={(row) => row.id}
      rowHref={mayWrite ? (row) => href("/characteristics/:characteristicId", { characteristicId: row.id }) : undefined}
      empty={empty}
    />
  );
}

function Move({ id, intent, what }: { id: string; intent: "earlier" | "later"; what: string }) {
  return (
    <EntryForm intent={intent} preventScrollReset>
      <input type="hidden" name="id" value={id} />
      <SubmitButton weight="quiet" pendingText="Moving">
        {intent === "earlier" ? "Up" : "Down"}
        <span className="sr-only">: {what}</span>
      </SubmitButton>
    </EntryForm>
  );
}
