import { canonicalJson, sha256Hex } from "#app/domain/canonical.ts";
import { alwaysRequiredLines, gateLines, type GateLineName, type GateRecords } from "#app/domain/gate-records.ts";
import { calculationsLine } from "#app/domain/gate/calculations-line.ts";
import { cautionsLine } from "#app/domain/gate/cautions-line.ts";
import { concede } from "#app/domain/gate/concede.ts";
import { customerLine } from "#app/domain/gate/customer-line.ts";
import { depositLine } from "#app/domain/gate/deposit-line.ts";
import { fitLine } from "#app/domain/gate/fit-line.ts";
import type { Findings, GateLine, Missing } from "#app/domain/gate/gate-line.ts";
import { instructionsLine } from "#app/domain/gate/instructions-line.ts";
import { machinistLine } from "#app/domain/gate/machinist-line.ts";
import { modelLine } from "#app/domain/gate/model-line.ts";
import { printLine } from "#app/domain/gate/print-line.ts";

export type { GateAction, GateLine, GateLineState, GateRole, Missing } from "#app/domain/gate/gate-line.ts";

/** Changes whenever the same records could get another verdict; a release stores it. */
export const GATE_RULE_VERSION = "1";

export interface GateResultDocument {
  /** "go": every line is met or conceded and nothing blocks the revision. */
  verdict: "go" | "no-go";
  ruleVersion: string;
  /** SHA-256 of the records; the same for the same records in any order. */
  recordsHash: string;
  /** What stands in the way beside the lines: the revision is set aside, or was replaced. */
  blocked: Missing[];
  lines: GateLine[];
}

const judgeLine: Record<GateLineName, (records: GateRecords) => Findings> = {
  model: modelLine,
  print: printLine,
  fit: fitLine,
  calculations: calculationsLine,
  instructions: instructionsLine,
  machinist: machinistLine,
  customer: customerLine,
  deposit: depositLine,
  cautions: cautionsLine,
};

/**
 * Is this revision a go, by what the records say, and if not, exactly what is missing?
 *
 * @param records everything the gate looks at; see gate-records.ts
 * @param now only decides whether a concession until a date still holds
 * @returns the nine lines in their fixed order. A line the part does not ask for is met by nothing
 *   (`required` false, `by` empty) and says so in its remarks; model and cautions are always asked for
 */
export function evaluateGate(records: GateRecords, now: Date): GateResultDocument {
  const lines = gateLines.map((line): GateLine => {
    const required = alwaysRequiredLines.includes(line) || records.part.requiredLines.includes(line);
    if (!required) return { line, required, state: "met", by: [], missing: [], remarks: ["this part does not ask for this line"] };
    return { required, ...concede(line, judgeLine[line](records), records, now) };
  });
  const blocked = whatBlocks(records);
  const clear = lines.every(({ state }) => state === "met" || state === "conceded") && blocked.length === 0;
  return { verdict: clear ? "go" : "no-go", ruleVersion: GATE_RULE_VERSION, recordsHash: hashRecords(records), blocked, lines };
}

/** SHA-256 of the records' canonical form, in which every list stands in the order of its ids. */
export function hashRecords(records: GateRecords): string {
  return sha256Hex(canonicalJson(inFixedOrder(records)));
}

/** The same records with every list in the order of its ids: queries promise no order. */
export function inFixedOrder(records: GateRecords): GateRecords {
  const ordered = Object.entries(records).map(([key, value]) => [
    key,
    Array.isArray(value) ? [...(value as { id: string }[])].sort((a, b) => (a.id < b.id ? -1 : 1)) : value,
  ]);
  return Object.fromEntries(ordered) as GateRecords;
}

function whatBlocks({ revision }: GateRecords): Missing[] {
  const common = { about: [revision.id], failed: true, concedable: "no" as const };
  return [
    ...(revision.setAside === null ? [] : [{ what: `revision ${revision.ordinal} is set aside: ${revision.setAside}`, who: "designer" as const, action: "take-up-again" as const, ...common }]),
    ...(revision.replaced ? [{ what: `a later revision than ${revision.ordinal} was released`, who: "designer" as const, action: "make-revision" as const, ...common }] : []),
  ];
}
