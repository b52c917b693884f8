import { createElement as h } from "react";
import { expect, test } from "vitest";
import { GateLines, GateMark, GateRow, gateRowText, GateVerdict, MarkShape, type GateLineView, type GateState } from "#app/components/gate-marks.tsx";
import { verdictSentence } from "#app/components/gate-words.ts";
import { serverMarkup, wordsOf } from "./render.ts";

const states: GateState[] = ["met", "open", "failed", "conceded"];
const lines: GateLineView[] = [
  { line: "model", state: "met", detail: "valid solid" },
  { line: "machinist", state: "conceded" },
  { line: "customer", state: "open", missing: [{ what: "not asked yet", who: "designer" }] },
  { line: "fit", state: "failed", missing: [{ what: "bore reads 62.09", who: "designer", act: { label: "Record why", to: "/fit" } }] },
];

test("the four marks differ in shape, not in colour alone, and each carries its word", async () => {
  const shapes = await Promise.all(states.map(async (state) => (await serverMarkup(h(MarkShape, { state }))).replace(/class="[^"]*"/g, (text) => (text.includes("fill-none") ? "hollow" : "solid"))));
  expect(new Set(shapes).size).toBe(4);
  for (const state of states) expect(wordsOf(await serverMarkup(h(GateMark, { state })))).toBe(state);
});

test("unmet lines come first, each with what is missing and one action", async () => {
  const words = wordsOf(await serverMarkup(h(GateLines, { lines })));
  expect(words).toBe("fit failed bore reads 62.09 Record why customer open not asked yet waits on the designer machinist conceded model valid solid met");
});

test("the small row is one sentence for readers", async () => {
  expect(gateRowText(lines)).toBe("Gate: 1 met; fit failed; customer open; machinist conceded");
  expect(gateRowText([{ line: "model", state: "met" }])).toBe("Gate: all 1 met");
  expect(await serverMarkup(h(GateRow, { lines }))).toContain('role="img" aria-label="Gate: 1 met; fit failed; customer open; machinist conceded"');
});

test("the verdict is a sentence", async () => {
  const of = (...given: GateState[]) => given.map((state, index) => ({ line: String(index), state }));
  expect(verdictSentence("go", of("met", "met"))).toEqual({ sentence: "Go", rest: "Every line is met." });
  expect(verdictSentence("go", of("met", "conceded")).sentence).toBe("Go, with a concession");
  expect(verdictSentence("no-go", of("open", "met"))).toEqual({ sentence: "No-go, for one reason", rest: "Everything else stands." });
  expect(verdictSentence("no-go", of("open", "failed")).sentence).toBe("No-go, for two reasons");
  expect(verdictSentence("no-go", of("open", "failed")).rest).not.toContain("stands");
  expect(verdictSentence("no-go", of("met"), 1).sentence).toBe("No-go, for one reason");
  const blocked = wordsOf(await serverMarkup(h(GateVerdict, { verdict: "no-go", lines: of("met"), blocked: [{ what: "revision 3 is set aside" }] })));
  expect(blocked).toContain("revision 3 is set aside");
});
