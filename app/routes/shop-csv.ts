import { readListRequest } from "#app/components/table-query.ts";
import { instrumentSorts, listInstruments } from "#app/data/instruments.server.ts";
import { listMaterials, materialSorts } from "#app/data/materials.server.ts";
import { listPresets, listPrinters, presetSorts, printerSorts } from "#app/data/printers.server.ts";
import { listShopQuestions } from "#app/data/questions.server.ts";
import { inShop, type Tx } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/shop-csv.ts";

interface ShopTable {
  columns: Array<{ key: string; header: string }>;
  rows: (tx: Tx, request: Request) => Promise<object[]>;
}

const setAside = { key: "setAside", header: "Set aside" };

/** Each table of the shop by the last word of its address. */
const tables: Record<string, ShopTable> = {
  instruments: {
    rows: async (tx, request) => (await listInstruments(tx, readListRequest(request, instrumentSorts), true)).rows,
    columns: [
      { key: "name", header: "Instrument" },
      { key: "kind", header: "Kind" },
      { key: "resolutionMm", header: "Resolution (mm)" },
      { key: "uncertaintyMm", header: "Uncertainty U (mm)" },
      { key: "trust", header: "Trust" },
      { key: "calibratedUntil", header: "Calibrated until" },
      { key: "checkedOn", header: "Checked on" },
      { key: "checkedWith", header: "Checked with" },
      setAside,
    ],
  },
  printers: {
    rows: async (tx, request) => (await listPrinters(tx, readListRequest(request, printerSorts), true)).rows,
    columns: [{ key: "name", header: "Printer" }, { key: "process", header: "Process" }, { key: "bedMm", header: "Room (mm)" }, { key: "presets", header: "Presets" }, setAside],
  },
  presets: {
    rows: async (tx, request) => (await listPresets(tx, readListRequest(request, presetSorts), true)).rows,
    columns: [
      { key: "name", header: "Preset" },
      { key: "printerName", header: "Printer" },
      { key: "material", header: "Material" },
      { key: "layerMm", header: "Layer (mm)" },
      { key: "walls", header: "Walls" },
      { key: "infillPct", header: "Infill (%)" },
      { key: "scaleX", header: "Scale x" },
      { key: "scaleY", header: "Scale y" },
      { key: "scaleZ", header: "Scale z" },
      { key: "note", header: "Note" },
      setAside,
    ],
  },
  materials: {
    rows: async (tx, request) => (await listMaterials(tx, readListRequest(request, materialSorts), true)).rows,
    columns: [
      { key: "code", header: "Code" },
      { key: "name", header: "Material" },
      { key: "densityKgM3", header: "Density (kg/m³)" },
      { key: "yieldMPa", header: "Yield (MPa)" },
      { key: "tensileMPa", header: "Tensile (MPa)" },
      { key: "shearMPa", header: "Shear (MPa)" },
      { key: "typical", header: "Typical values" },
      { key: "source", header: "Source" },
      setAside,
    ],
  },
  questions: {
    rows: (tx, request) => listShopQuestions(tx, { withSetAside: new URL(request.url).searchParams.get("aside") === "1" }),
    columns: [{ key: "question", header: "Question" }, { key: "answers", header: "Answers" }, setAside],
  },
};

/** /shop/instruments.csv and its siblings. */
export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "equipment:read");
  const name = /\/([a-z]+)\.csv$/.exec(new URL(request.url).pathname)?.[1] ?? "";
  const table = tables[name];
  if (!table) throw new Response("Not found", { status: 404, statusText: "Not found" });
  const rows = await inShop(viewer, (tx) => table.rows(tx, request));
  return csvResponse(name, table.columns, rows.map((row) => ({ ...row })));
}
