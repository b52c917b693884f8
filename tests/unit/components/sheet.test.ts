import { createElement as h, Fragment } from "react";
import { expect, test } from "vitest";
import { Cautions, CautionLine } from "#app/components/caution.tsx";
import { Empty } from "#app/components/empty.tsx";
import { ErrorPage, faultOf } from "#app/components/error-page.tsx";
import { Facts } from "#app/components/facts.tsx";
import { Frame } from "#app/components/frame.tsx";
import { GateRow } from "#app/components/gate-marks.tsx";
import { Keypad } from "#app/components/keypad.tsx";
import { LimitsScale } from "#app/components/limits-scale.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { PhotoWithSpots } from "#app/components/photo-with-spots.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { Steps } from "#app/components/steps.tsx";
import { Thread } from "#app/components/thread.tsx";
import { TitleBlock } from "#app/components/title-block.tsx";
import { WaitItem, WaitList } from "#app/components/wait-list.tsx";
import { serverMarkup, wordsOf } from "./render.ts";

const everything = h(
  Frame,
  {
    nav: [{ to: "/", label: "Today", end: true }, { to: "/jobs", label: "Jobs" }],
    crumbs: [{ label: "Sidecar fuel side", to: "/jobs/1" }, { label: "Revision 4" }],
    person: "Ines Barrow, designer",
    menu: [{ label: "Account", to: "/account" }, { label: "Sign out", postTo: "/sign-out", fields: { everywhere: "no" } }],
    searchAction: "/search",
    preferences: { theme: "system", units: "mm" },
    children: h(
      Sheet,
      {
        right: h(Section, { title: "Beside", children: h(Facts, { facts: [{ label: "Deposit", value: "480.00" }] }) }),
        titleBlock: h(TitleBlock, { cells: ["Part", "Number", "Revision", "Stock"].map((label) => ({ label, value: `${label} value` })) }),
        band: h(Empty, { children: "No holes yet." }),
        children: h(
          Fragment,
          null,
          h(SheetHeading, { title: "One thing waits on you" }),
          h(WaitList, { children: h(WaitItem, { title: "Filler flange 4 is at the gate", marks: h(GateRow, { lines: [{ line: "fit", state: "met" as const }] }), action: h(LinkButton, { to: "/gate", children: "Decide" }) }) }),
          h(Steps, { steps: [{ label: "Measured", state: "done" }, { label: "Your look", state: "now" }, { label: "On the track", state: "ahead" }] }),
          h(PhotoWithSpots, { src: "/photo", alt: "Print 4", width: 400, height: 300, spots: [{ id: "1", number: 1, x: 0.25, y: 0.75, label: "Hinge", href: "#callout-1" }], pick: { number: 2, start: { x: 0.5, y: 0.1 } } }),
          h(Thread, { label: "Callout 1", messages: [{ id: "m1", who: "R. Aune", at: "2026-11-12T10:14:00Z", text: "Yes.", origin: "by text message", internal: true }] }),
          h(LimitsScale, { lower: 62.15, upper: 62.2, readings: [62.09], uncertainty: 0.01, state: "failed" }),
          h(Keypad, { value: "62.0", onChange: () => {}, unit: "mm", onUnitChange: () => {} }),
          h(ProgressLine, { label: "Uploading", share: 0.4 }),
          h(Notice, { kind: "error", children: "The file could not be read." }),
          h(Cautions, { cautions: [{ code: "fuel", title: "Fuel burns", text: "Never put fuel on a print.", basis: "carries fuel" }] }),
          h(CautionLine),
        ),
      },
    ),
  },
);

test("nothing the server sends carries a style of its own: the content security policy would refuse it", async () => {
  const markup = await serverMarkup(everything);
  expect(markup.length).toBeGreaterThan(5000);
  expect(markup).not.toMatch(/\sstyle=/i);
  expect(markup).not.toContain("<style");
});

test("ids are unique and every picture and control has a name", async () => {
  const markup = await serverMarkup(everything);
  const ids = [...markup.matchAll(/ id="([^"]+)"/g)].map((match) => match[1]);
  expect(new Set(ids).size).toBe(ids.length);
  for (const [tag] of markup.matchAll(/<img [^>]*>/g)) expect(tag).toMatch(/ alt="[^"]+"/);
  for (const [tag] of markup.matchAll(/<svg [^>]*role="img"[^>]*>/g)) expect(tag).toMatch(/aria-label="[^"]+"/);
});

test("units and theme are small forms that come back to the same page", async () => {
  const markup = await serverMarkup(everything, { path: "/revisions/4?view=overlay" });
  expect([...markup.matchAll(/action="\/preferences"/g)]).toHaveLength(2);
  expect(markup).toContain('name="returnTo" value="/revisions/4?view=overlay"');
  expect(markup).toMatch(/<button value="mm" aria-pressed="true"[^>]* name="units"/);
  expect(markup).toMatch(/<button value="system" aria-pressed="true"[^>]* name="theme"/);
  expect(markup).toMatch(/<form [^>]*action="\/sign-out" method="post"/);
});

test("the first stop of the keyboard leads past the top line", async () => {
  const markup = await serverMarkup(everything);
  expect(/<a [^>]*href="([^"]+)"/.exec(markup)![1]).toBe("#sheet");
  expect(markup).toContain('<main id="sheet" tabindex="-1"');
});

test("a spot lies at its fractions, and a new one is sent as x and y", async () => {
  const markup = await serverMarkup(everything);
  expect(markup).toMatch(/<a href="#callout-1" aria-label="Callout 1: Hinge">.*?cx="25%" cy="75%"/s);
  expect(markup).toMatch(/name="x"[^>]*value="0.5"/);
  expect(markup).toMatch(/name="y"[^>]*value="0.1"/);
});

const response = (status: number, data: unknown) => ({ status, statusText: "", internal: false, data });

test("a fault says what happened and what to do, and shows no inside", async () => {
  const thrown = new Error("relation prints does not exist");
  const page = wordsOf(await serverMarkup(h(ErrorPage, { error: thrown })));
  expect(page).toContain("Something broke on our side");
  expect(page).not.toContain("relation");
  expect(page).not.toMatch(/\bat .*:\d+/);
  expect(faultOf(response(500, "duplicate key value")).said).toBeNull();
  expect(faultOf(response(503, { requestId: "r-17" })).requestId).toBe("r-17");
  expect(faultOf(response(404, "Error: No route matches URL \"/x\"")).said).toBeNull();
  expect(faultOf(response(409, "Revision 4 was released while you looked.")).said).toBe("Revision 4 was released while you looked.");
  const titles = [400, 401, 403, 404, 405, 409, 410, 413, 429, 500, 503].map((status) => faultOf(response(status, null)).title);
  expect(new Set(titles).size).toBe(titles.length);
  expect(wordsOf(await serverMarkup(h(ErrorPage, { error: response(401, null), framed: true })))).toContain("Sign in");
});
