import type { GateRecords } from "#app/domain/gate-records.ts";
import { definingStep, gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { counted, inWords } from "#app/domain/numbers-in-words.ts";

const statements = {
  generalTolerance: "the general tolerance",
  datums: "the datums",
  criticalSurfaces: "the critical surfaces",
  edgeBreak: "the edge break",
  coating: "the coating",
} as const;

/** Is what the STEP does not carry stated, for every recognised hole too, and confirmed by the designer for this model? */
export function instructionsLine(records: GateRecords): Findings {
  const { restsOn, lacks, done } = gatherFindings();
  const { instructions, holeInstructions } = records;
  const step = definingStep(records);
  if (instructions === null) {
    lacks("no instructions are stated", "designer", "state-instructions");
    return done();
  }
  restsOn(instructions.id);
  const about = { about: [instructions.id] };
  const unstated = (Object.keys(statements) as (keyof typeof statements)[]).filter((key) => instructions[key] === null);
  if (unstated.length > 0) {
    lacks(`not stated: ${inWords(unstated.map((key) => statements[key]))} ("none" is an answer)`, "designer", "state-instructions", about);
  }

  const instructed = new Set<number>();
  for (const row of holeInstructions) {
    restsOn(row.id);
    if (row.treatment === null) lacks(`${row.label} has no machining instruction`, "designer", "state-instructions", { about: [row.id] });
    row.holes.forEach((hole) => instructed.add(hole));
  }
  const recognised = step?.measured?.holes ?? 0;
  const left = Array.from({ length: recognised }, (_, hole) => hole).filter((hole) => !instructed.has(hole));
  if (left.length > 0) {
    lacks(`${counted(left.length, "recognised hole has", "recognised holes have")} no machining instruction`, "designer", "state-instructions", about);
  }

  if (instructions.confirmed === null) {
    lacks("the designer has not confirmed the instructions", "designer", "confirm-instructions", about);
  } else if (instructions.confirmed.modelSha256 === step?.sha256) {
    restsOn(step.id);
  } else {
    lacks("the instructions were confirmed for another model file", "designer", "confirm-instructions", about);
  }
  return done();
}
