import { createElement as h } from "react";
import { expect, test } from "vitest";
import fc from "fast-check";
import { Confirm } from "#app/components/confirm.tsx";
import { CheckField, LengthField, RadioRow, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { lengthEntry } from "#app/components/measure-text.ts";
import { serverMarkup, wordsOf } from "./render.ts";

const idsIn = (markup: string) => new Set([...markup.matchAll(/ id="([^"]+)"/g)].map((match) => match[1]));

test("a refused form comes back filled, each fault beside its field and linked from the summary", async () => {
  const markup = await serverMarkup(
    h(
      EntryForm,
      { errors: { bore: ["62,1x is not a length."], form: ["Two parts can't share a number."] }, values: { bore: "62,1x", note: "kept words", kind: "b", method: "m2", critical: "on" }, labels: { bore: "Pilot bore" } },
      h(LengthField, { name: "bore", label: "Pilot bore", hint: "at three places", defaultMm: 5 }),
      h(TextArea, { name: "note", label: "Note" }),
      h(SelectField, { name: "method", label: "Method", options: [{ value: "m1", label: "Caliper" }, { value: "m2", label: "Gauge" }] }),
      h(RadioRow, { name: "kind", label: "Kind", options: [{ value: "a", label: "A" }, { value: "b", label: "B" }] }),
      h(CheckField, { name: "critical", label: "Critical" }),
      h(SubmitButton, { children: "Save" }),
    ),
  );
  expect(markup).toContain('value="62,1x"');
  expect(markup).toContain("kept words</textarea>");
  expect(markup).toMatch(/<option value="m2" selected="">/);
  expect(markup).toMatch(/type="radio"[^>]*value="b"[^>]*checked=""|checked=""[^>]*value="b"/);
  expect(markup).toMatch(/type="checkbox"[^>]*checked=""/);
  expect(wordsOf(markup)).toContain("two things to mend");
  expect(wordsOf(markup)).toContain("Pilot bore: 62,1x is not a length.");
  expect(wordsOf(markup)).toContain("Two parts can't share a number.");

  const ids = idsIn(markup);
  const linked = [...markup.matchAll(/href="#([^"]+)"/g)].map((match) => match[1]);
  const described = [...markup.matchAll(/aria-describedby="([^"]+)"/g)].flatMap((match) => match[1]!.split(" "));
  const labelled = [...markup.matchAll(/ for="([^"]+)"/g)].map((match) => match[1]);
  expect(linked).toHaveLength(1);
  expect(described).toHaveLength(2);
  for (const id of [...linked, ...described, ...labelled]) expect(ids).toContain(id);
  expect([...markup.matchAll(/aria-invalid="true"/g)]).toHaveLength(1);
});

test("an unticked square stays unticked when the form comes back, whatever it was before", async () => {
  const markup = await serverMarkup(h(EntryForm, { errors: { form: ["no"] }, values: {} }, h(CheckField, { name: "critical", label: "Critical", defaultChecked: true })));
  expect(markup).not.toContain("checked");
});

test("a password is never sent back", async () => {
  const markup = await serverMarkup(h(EntryForm, { values: { password: "hunter2secret" } }, h(TextField, { type: "password", name: "password", label: "Password" })));
  expect(markup).not.toContain("hunter2secret");
});

test("a form says which unit its lengths were typed in, and keeps the one it came back with", async () => {
  const field = h(LengthField, { name: "bore", label: "Bore", defaultMm: 25.4 });
  const inches = await serverMarkup(h(EntryForm, {}, field), { units: "in" });
  expect(inches).toMatch(/name="units" value="in"/);
  expect(inches).toContain('value="1"');
  const kept = await serverMarkup(h(EntryForm, { values: { units: "mm", bore: "12x" } }, field), { units: "in" });
  expect(kept).toMatch(/name="units" value="mm"/);
  expect(wordsOf(kept)).toContain("Bore mm");
});

test("a stored length shown in inches comes back as the same length", () => {
  // 25.4 mm to the inch, exact: ISO 80000-3 note on the inch; NIST SP 811 (from memory).
  fc.assert(
    fc.property(fc.integer({ min: -50_000_000, max: 50_000_000 }), (tenthsOfMicrometre) => {
      const mm = tenthsOfMicrometre / 10_000;
      expect(Number(lengthEntry(mm, "in")) * 25.4).toBeCloseTo(mm, 6);
      expect(lengthEntry(String(mm), "mm")).toBe(String(mm));
    }),
  );
});

test("a field outside a form is a mistake of ours and says so", async () => {
  await expect(serverMarkup(h(TextField, { name: "a", label: "A" })).then((markup) => (markup.includes("must stand inside") ? Promise.reject(new TypeError(markup)) : markup))).rejects.toThrow("must stand inside an EntryForm");
});

test("a conflict shows both versions; the row's version goes along", async () => {
  const markup = await serverMarkup(
    h(EntryForm, { intent: "save" }, h(RowVersion, { value: 7 }), h(ConflictNotice, { by: "Ines Barrow", changes: [{ field: "Upper", yours: "62.20", theirs: "62.25" }] }), h(FieldGroup, { legend: "Limits", children: null })),
  );
  expect(markup).toMatch(/name="rowVersion" value="7"/);
  expect(markup).toMatch(/name="intent" value="save"/);
  expect(wordsOf(markup)).toMatch(/Ines Barrow changed this .* Upper 62\.20 62\.25/);
});

test("without scripts a confirmation unfolds in place, with all it sends", async () => {
  const markup = await serverMarkup(h(Confirm, { trigger: "Set aside", title: "Set revision 3 aside?", text: "It can be taken up again.", confirmText: "Yes, set it aside", sends: { revisionId: "r3" }, action: "/revisions/r3" }));
  expect(markup).toMatch(/<details><summary[^>]*>Set aside<\/summary>/);
  expect(markup).toMatch(/<form [^>]*action="\/revisions\/r3" method="post"/);
  expect(markup).toMatch(/name="revisionId" value="r3"/);
});
