import { index, layout, prefix, route, type RouteConfig } from "@react-router/dev/routes";

// Every URL of the product, by hand, in one place. Signed-in pages share one layout.
export default [
  route("sign-in", "routes/sign-in.tsx"),
  route("sign-in/link/:token", "routes/sign-in-link.tsx"),
  route("sign-in/github", "routes/sign-in-github.tsx"),
  route("sign-in/github/callback", "routes/sign-in-github.tsx", { id: "sign-in-github-callback" }),
  route("prove", "routes/prove.tsx"),
  route("prove/link/:token", "routes/prove-link.tsx"),
  route("account", "routes/account.tsx"),
  route("shops", "routes/shops.tsx"),
  route("g/:token", "routes/guest-link.tsx"),
  route("sign-out", "routes/sign-out.tsx"),
  route("preferences", "routes/preferences.tsx"),
  route("health", "routes/health.ts"),

  layout("routes/signed-in.tsx", [
    index("routes/today.tsx"),

    // Jobs
    route("jobs", "routes/jobs.tsx"),
    route("jobs/new", "routes/job-edit.tsx", { id: "job-new" }),
    route("jobs/:jobId", "routes/job.tsx"),
    route("jobs/:jobId/edit", "routes/job-edit.tsx"),
    route("jobs/:jobId/access", "routes/job-access.tsx"),
    route("jobs/:jobId/deposit", "routes/deposit.tsx"),
    route("jobs/:jobId/mating-parts/new", "routes/mating-part-edit.tsx", { id: "mating-part-new" }),
    route("mating-parts/:matingPartId", "routes/mating-part.tsx"),
    route("mating-parts/:matingPartId/edit", "routes/mating-part-edit.tsx"),
    route("jobs/:jobId/parts/new", "routes/part-new.tsx"),
    route("parts/:partId", "routes/part.tsx"),
    route("parts/:partId/edit", "routes/part-edit.tsx"),
    route("parts/:partId/characteristics/new", "routes/characteristic.tsx", { id: "characteristic-new" }),
    route("characteristics/:characteristicId", "routes/characteristic.tsx"),

    // Prints, fit checks, callouts
    route("revisions/:revisionId/prints/new", "routes/print-new.tsx"),
    route("prints/:printId", "routes/print.tsx"),
    route("fit-checks/:fitCheckId", "routes/fit-check.tsx"),
    route("revisions/:revisionId/carry-over", "routes/carry-over.tsx"),
    route("revisions/:revisionId/callouts", "routes/callouts.tsx"),
    route("revisions/:revisionId/callouts/new", "routes/callout-new.tsx"),
    route("callouts/:calloutId", "routes/callout.tsx"),
    route("photos/:fileId", "routes/photo.tsx"),

    // A revision: its sheet, its files
    route("parts/:partId/revisions/new", "routes/revision-new.tsx"),
    route("revisions/:revisionId", "routes/revision.tsx"),
    route("revisions/:revisionId/files", "routes/revision-files.tsx"),

    // What backs a revision
    route("revisions/:revisionId/calculations/new", "routes/calculation-new.tsx"),
    route("calculations/:calculationId", "routes/calculation.tsx"),
    route("revisions/:revisionId/instructions", "routes/instructions.tsx"),
    route("revisions/:revisionId/approval", "routes/approval.tsx"),
    route("revisions/:revisionId/makeability", "routes/makeability.tsx"),

    // The gate and what comes of it
    route("revisions/:revisionId/gate", "routes/gate.tsx"),
    route("revisions/:revisionId/cautions", "routes/cautions.tsx"),
    route("packets/:decisionId", "routes/packet.tsx"),
    route("packets/:decisionId/download", "routes/packet-download.ts"),

    // The customer's side
    route("your-job/:jobId", "routes/your-job.tsx"),

    // What the shop works with
    route("shop", "routes/shop.ts"),
    route("shop/instruments", "routes/shop-instruments.tsx"),
    route("shop/instruments/new", "routes/shop-instrument.tsx", { id: "instrument-new" }),
    route("shop/instruments/:instrumentId", "routes/shop-instrument.tsx"),
    route("shop/printers", "routes/shop-printers.tsx"),
    route("shop/printers/new", "routes/shop-printer.tsx", { id: "printer-new" }),
    route("shop/printers/:printerId", "routes/shop-printer.tsx"),
    route("shop/presets", "routes/shop-presets.tsx"),
    route("shop/presets/new", "routes/shop-preset.tsx", { id: "preset-new" }),
    route("shop/presets/:presetId", "routes/shop-preset.tsx"),
    route("shop/materials", "routes/shop-materials.tsx"),
    route("shop/materials/new", "routes/shop-material.tsx", { id: "material-new" }),
    route("shop/materials/:materialId", "routes/shop-material.tsx"),
    route("shop/questions", "routes/shop-questions.tsx"),
    route("shop/questions/:questionId", "routes/shop-question.tsx"),
    route("shop/settings", "routes/shop-settings.tsx"),

    route("logbook", "routes/logbook.tsx"),

    // Customers
    route("customers", "routes/customers.tsx"),
    route("customers/new", "routes/customer.tsx", { id: "customer-new" }),
    route("customers/:customerId", "routes/customer.tsx"),
  ]),

  // The bench has the whole screen of the phone to itself
  route("prints/:printId/fit-checks/new", "routes/fit-check-new.tsx"),

  // Stored files: permission is asked here, the bytes come from the store
  route("files/:fileId", "routes/file.ts"),
  route("files/:fileId/:kind", "routes/file-derived.ts"),

  // Tables as files
  route("logbook.csv", "routes/logbook-csv.ts"),
  route("customers.csv", "routes/customers-csv.ts"),
  route("jobs.csv", "routes/jobs-csv.ts"),
  route("jobs/:jobId/parts.csv", "routes/parts-csv.ts"),
  ...["instruments", "printers", "presets", "materials", "questions"].map((table) => route(`shop/${table}.csv`, "routes/shop-csv.ts", { id: `${table}-csv` })),
  route("mating-parts/:matingPartId/measurements.csv", "routes/measurements-csv.ts"),
  route("parts/:partId/characteristics.csv", "routes/characteristics-csv.ts"),

  ...prefix("api", [
    route("events", "routes/api-events.ts"),
    route("fit-checks", "routes/api-fit-checks.ts"),
    route("uploads", "routes/api-uploads.ts"),
    route("uploads/:fileId", "routes/api-upload.ts"),
  ]),
] satisfies RouteConfig;
