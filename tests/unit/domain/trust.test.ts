import { expect, test } from "vitest";
import { conflictsBetween } from "#app/domain/conflicts.ts";
import { trustToday, type InstrumentTrust } from "#app/domain/trust.ts";

const none: InstrumentTrust = { trust: "unverified", calibratedUntil: null, checkedOn: null, checkedWith: "" };

test.each([
  [{ ...none }, false, "unverified"],
  [{ ...none, trust: "calibrated", calibratedUntil: "2026-12-02" }, true, "calibrated until 2026-12-02"],
  [{ ...none, trust: "calibrated", calibratedUntil: "2026-12-01" }, true, "calibrated until 2026-12-01"],
  [{ ...none, trust: "calibrated", calibratedUntil: "2026-11-30" }, false, "calibration ran out on 2026-11-30"],
  [{ ...none, trust: "checked", checkedOn: "2026-12-01", checkedWith: "gauge block 25 mm" }, true, "checked today on gauge block 25 mm"],
  [{ ...none, trust: "checked", checkedOn: "2026-11-30", checkedWith: "ring 40 mm" }, false, "not checked today; last on 2026-11-30 on ring 40 mm"],
] as Array<[InstrumentTrust, boolean, string]>)("%o on 1 December 2026", (instrument, trusted, words) => {
  expect(trustToday(instrument, "2026-12-01")).toEqual({ trusted, words });
});

test("only fields that differ are a conflict, in the order of their labels", () => {
  const labels = { name: "Name", note: "Note", phone: "Phone" };
  expect(conflictsBetween(labels, { phone: "1", name: "A", note: "same", version: "1" }, { name: "B", note: "same", version: "2" })).toEqual([
    { field: "Name", yours: "A", theirs: "B" },
    { field: "Phone", yours: "1", theirs: "" },
  ]);
});
