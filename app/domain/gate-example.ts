import type { GateRecords } from "#app/domain/gate-records.ts";

// Stand-ins for the hashes of files: 64 hex digits, told apart at a glance.
const stepSha256 = "5e".repeat(32);
const stlSha256 = "51".repeat(32);
const parentStepSha256 = "3e".repeat(32);

/**
 * A complete records document that is a go, invented, with every kind of record once where one is
 * enough: two characteristics, so that one is tried on a print and the other carried over; a callout
 * that is closed and a concession that is over, which no line rests on.
 */
export const exampleGateRecords: GateRecords = {
  part: {
    id: "part-1",
    name: "Fuel filler flange",
    quantity: 1,
    requiredLines: ["model", "print", "fit", "calculations", "instructions", "machinist", "customer", "deposit", "cautions"],
    requiredCalculations: [{ kind: "thread-engagement", hazard: "none" }],
    hazards: { speed_rpm: null, pressure_MPa: null, temperature_C: null, fluid: "fuel", lifting: false },
    hazardsToState: ["fluid"],
    meshAgreement: { bounds_mm: 0.1, volume_pct: 0.5 },
  },
  revision: { id: "revision-4", ordinal: 4, setAside: null, replaced: false },
  models: [
    {
      id: "model-step",
      kind: "step",
      name: "filler-flange-4.step",
      sha256: stepSha256,
      hashVerified: true,
      unit: { source: "mm", assumed: false },
      unreadable: null,
      measured: { valid: true, closed: true, solids: 1, volume_mm3: 41250, bounds_mm: { min: [-45, -45, 0], max: [45, 45, 12] }, holes: 6 },
    },
    {
      id: "model-stl",
      kind: "stl",
      name: "filler-flange-4.stl",
      sha256: stlSha256,
      hashVerified: true,
      unit: { source: "mm", assumed: false },
      unreadable: null,
      measured: { valid: null, closed: true, solids: null, volume_mm3: 41193, bounds_mm: { min: [-44.98, -44.99, 0], max: [44.99, 44.99, 12] }, holes: 0 },
    },
  ],
  characteristics: [
    {
      id: "characteristic-spigot",
      name: "spigot bore",
      kind: "limits",
      unit: "mm",
      printLimits: { low: 62.15, high: 62.2 },
      finalLimits: { low: 62.1, high: 62.13 },
      places: 3,
      required: true,
      critical: true,
      provableOnPrint: true,
      photoRequired: true,
      matingPart: "mating-part-1",
    },
    {
      id: "characteristic-screws",
      name: "all screws start",
      kind: "yes-no",
      unit: "yes/no",
      printLimits: null,
      finalLimits: null,
      places: 1,
      required: true,
      critical: false,
      provableOnPrint: true,
      photoRequired: false,
      matingPart: "mating-part-1",
    },
  ],
  matingParts: [{ id: "mating-part-1", name: "Tank ring" }],
  photos: [{ id: "photo-1", sha256: "f0".repeat(32), hashVerified: true }],
  prints: [{ id: "print-1", name: "4.1", whole: true, proves: [], modelSha256: stlSha256, spoiled: null }],
  fitChecks: [{ id: "fit-check-1", print: "print-1", matingPart: "mating-part-1", at: "2024-02-10T17:20:00Z", by: "Rin Aldous" }],
  results: [
    {
      id: "result-1",
      fitCheck: "fit-check-1",
      characteristic: "characteristic-spigot",
      readings: [62.16, 62.18, 62.17],
      answers: [],
      photos: ["photo-1"],
      instrument: { name: "Bore gauge 50-75", uncertainty: 0.005, trust: "calibrated" },
      cause: null,
    },
  ],
  carryOvers: [
    {
      id: "carry-over-1",
      characteristic: "characteristic-screws",
      fromRevision: "3",
      fromModelSha256: parentStepSha256,
      modelSha256: stepSha256,
      basis: "declared-unchanged",
      declared: { by: "Rin Aldous", reason: "only the spigot bore grew; the hole circle was not touched" },
      distance_mm: null,
      allowed_mm: null,
      matingPart: "mating-part-1",
      readings: [],
      answers: [true],
      photos: [],
    },
  ],
  calculations: [
    {
      id: "calculation-1",
      kind: "thread-engagement",
      title: "M5 threads in the ring",
      verdict: "pass",
      informationOnly: false,
      inputsCurrent: true,
      modelSha256: stepSha256,
      hazard: "none",
    },
  ],
  instructions: {
    id: "instructions-1",
    generalTolerance: "±0.1 mm unless stated",
    datums: "A: seal face; B: spigot bore",
    criticalSurfaces: "seal face, Ra 1.6 µm",
    edgeBreak: "0.2 to 0.4 mm, all edges",
    coating: "none",
    confirmed: { by: "Rin Aldous", at: "2024-02-10T18:00:00Z", modelSha256: stepSha256 },
  },
  holeInstructions: [{ id: "hole-instruction-1", label: "6 × Ø 5.50 through", holes: [0, 1, 2, 3, 4, 5], treatment: "clearance" }],
  questions: [{ id: "question-1", text: "Can it be held for the seal face and the bore in one set-up?", retired: false }],
  machinistAnswers: [
    { id: "machinist-answer-1", question: "question-1", stance: "agree", text: "Yes, soft jaws.", by: "Odo Farrant", at: "2024-02-11T08:30:00Z", modelSha256: stepSha256, closed: null },
  ],
  customerAnswers: [
    { id: "customer-answer-1", answer: "approved", reason: null, by: "Mika Sorn", at: "2024-02-11T12:05:00Z", modelSha256: stepSha256, since: null, recorded: null },
  ],
  callouts: [{ id: "callout-1", text: "Will the hinge clear the strap?", byCustomer: true, open: false }],
  deposit: { id: "deposit-1", currency: "EUR", agreed_minor: 25000, waived: null },
  payments: [{ id: "payment-1", currency: "EUR", amount_minor: 25000, how: "card", at: "2024-02-11T12:10:00Z" }],
  acknowledgements: [
    {
      id: "acknowledgement-1",
      by: "Rin Aldous",
      at: "2024-02-11T13:00:00Z",
      cautions: [
        { code: "check-not-approval", basis: "always shown" },
        { code: "machine-tools", basis: "always shown" },
        { code: "track-tests", basis: "always shown" },
        { code: "fuel", basis: "carries fuel" },
      ],
    },
  ],
  concessions: [
    {
      id: "concession-1",
      lines: ["deposit"],
      reason: "granted for a day while the payment was on its way; it has arrived since",
      by: "Rin Aldous",
      at: "2024-02-11T12:00:00Z",
      limit: { pieces: 1, until: "2024-02-12" },
      outsideApproval: null,
    },
  ],
};
