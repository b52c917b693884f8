import type { GateLineName } from "#app/domain/gate-records.ts";

/** What each gate line asks of a part, for the page where it is chosen. */
export const gateLineNeeds: Record<GateLineName, string> = {
  model: "a valid STEP, and an STL that agrees with it",
  print: "prints that can show every required characteristic",
  fit: "every required characteristic tried on the hardware",
  calculations: "the required calculations attached and passed",
  instructions: "holes, tolerances, edges and coating stated",
  machinist: "the machinist has answered, and no objection is open",
  customer: "the customer has approved this revision",
  deposit: "the agreed deposit is paid, or none is asked",
  cautions: "the hazards named, their cautions read",
};
