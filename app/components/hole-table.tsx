import { DataTable, type Column } from "#app/components/data-table.tsx";
import { Length, useUnits } from "#app/components/measure.tsx";

export interface HoleRow {
  /** "1 to 6" */
  places: string;
  diameterMm: number;
  /** null: through. */
  depthMm: number | null;
  entry: "plain" | "countersunk" | "counterbored" | "chamfered";
  entryDiameterMm: number | null;
  entryAngleDeg: number | null;
  circle: { diameterMm: number; equallySpaced: boolean } | null;
  instruction: string | null;
}

export interface HoleTableProps {
  holes: HoleRow[];
  /** Left out for who is not told what is done with them. */
  instructions: boolean;
}

/** The holes of the part, alike ones on one line, as a machinist reads them. */
export function HoleTable({ holes, instructions }: HoleTableProps) {
  const units = useUnits();
  const columns: Column<HoleRow>[] = [
    { key: "hole", label: "Hole", cell: ({ places }) => (
        <span className="whitespace-nowrap">
          <span className="sm:sr-only">{/\D/.test(places) ? "Holes " : "Hole "}</span>
          {places}
        </span>
      ) },
    { key: "diameter", label: `Ø ${units}`, align: "number", cell: ({ diameterMm }) => <Length mm={diameterMm} digits={2} align={2} bare /> },
    { key: "depth", label: "Depth", align: "number", cell: ({ depthMm }) => (depthMm === null ? "through" : <Length mm={depthMm} digits={2} bare />) },
    { key: "entry", label: "Entry", cell: (row) => <Entry row={row} /> },
    { key: "circle", label: "Lie", cell: ({ circle }) => (circle ? <>on a circle of <Length mm={circle.diameterMm} digits={2} />{circle.equallySpaced ? "" : ", unevenly"}</> : "–") },
    ...(instructions ? [{ key: "instruction", label: "Instruction", cell: ({ instruction }: HoleRow) => instruction ?? <span className="text-soft">not stated</span> }] : []),
  ];
  const told = columns.filter(({ key }) => key !== "circle" || holes.some(({ circle }) => circle));
  return <DataTable caption="Holes" captionHidden columns={told} rows={holes} rowKey={({ places }) => places} empty={{ text: "No hole was found in this model." }} />;
}

function Entry({ row: { entry, entryDiameterMm, entryAngleDeg } }: { row: HoleRow }) {
  if (entry === "plain") return "plain";
  return (
    <span className="whitespace-nowrap">
      {entry}
      {entryDiameterMm !== null && (
        <>
          {" "}
          Ø <Length mm={entryDiameterMm} digits={2} bare />
        </>
      )}
      {entryAngleDeg !== null && entry !== "counterbored" && ` ${Math.round(entryAngleDeg)}°`}
    </span>
  );
}
