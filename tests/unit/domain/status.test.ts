import { expect, test } from "vitest";
import { revisionStatus, type RevisionFacts } from "#app/domain/status.ts";

const nothing: RevisionFacts = { modelStored: false, printRecorded: false, fitChecked: false, gateCleared: false, released: false, piecesReceived: false, inspectionClosed: false, setAside: false, laterReleased: false };
const way: [keyof RevisionFacts, string][] = [
  ["modelStored", "modelled"],
  ["printRecorded", "printed"],
  ["fitChecked", "tried"],
  ["gateCleared", "cleared"],
  ["released", "released"],
  ["piecesReceived", "cut"],
  ["inspectionClosed", "accepted"],
];

test("a revision without a model has no status yet", () => {
  expect(revisionStatus(nothing)).toBeNull();
});

test("each step on the way gives the next status, the last that applies", () => {
  const facts = { ...nothing };
  for (const [fact, status] of way) {
    facts[fact] = true;
    expect(revisionStatus(facts)).toBe(status);
  }
});

test("set aside at any step, and replaced at any step; set aside is said first", () => {
  const facts = { ...nothing };
  for (const [fact] of way) {
    facts[fact] = true;
    expect(revisionStatus({ ...facts, setAside: true })).toBe("set aside");
    expect(revisionStatus({ ...facts, laterReleased: true })).toBe("replaced");
    expect(revisionStatus({ ...facts, setAside: true, laterReleased: true })).toBe("set aside");
  }
});

test("what was not released is neither cut nor accepted", () => {
  expect(revisionStatus({ ...nothing, modelStored: true, piecesReceived: true, inspectionClosed: true })).toBe("modelled");
});

test("all carried over: cleared without a print or fit check of its own", () => {
  expect(revisionStatus({ ...nothing, modelStored: true, gateCleared: true })).toBe("cleared");
});
