import { createElement as h } from "react";
import { expect, test } from "vitest";
import { DataTable, type Column, type DataTableProps } from "#app/components/data-table.tsx";
import { readTableQuery, withParams } from "#app/components/table-query.ts";
import { serverMarkup, wordsOf } from "./render.ts";

interface Part {
  id: string;
  name: string;
  mass: string;
}

const columns: Column<Part>[] = [
  { key: "name", label: "Part", sortable: true, cell: (part) => part.name },
  { key: "mass", label: "Mass", sortable: true, align: "number", cell: (part) => part.mass },
];
const parts: Part[] = [
  { id: "p1", name: "Filler flange", mass: "212.6 g" },
  { id: "p2", name: "Sprocket carrier", mass: "640.0 g" },
];

function table(path: string, more: Partial<DataTableProps<Part>> = {}) {
  return serverMarkup(h(DataTable<Part>, { caption: "Parts", columns, rows: parts, rowKey: (part) => part.id, empty: { text: "No part yet." }, ...more }), { path });
}

test("the URL's question is read; what can't be sorted by, or is no page, is left out", () => {
  const read = (text: string) => readTableQuery(new URLSearchParams(text), ["name", "due"], "-due");
  expect(read("sort=name&q=%20flange%20&page=3")).toEqual({ sort: { key: "name", descending: false }, q: "flange", page: 3 });
  expect(read("")).toEqual({ sort: { key: "due", descending: true }, q: "", page: 1 });
  expect(read("sort=-secret&page=-2").sort).toEqual({ key: "due", descending: true });
  for (const page of ["0", "-1", "1.5", "x", "1e99", ""]) expect(read(`page=${page}`).page).toSatisfy((value: number) => value === 1 || Number.isInteger(value));
  expect(withParams(new URLSearchParams("q=a&page=2"), { page: null, sort: "-name" })).toBe("?q=a&sort=-name");
});

test("a heading sorts, keeps the search, goes back to the first page, and turns round on the second press", async () => {
  const first = await table("/parts?q=a&page=2");
  expect(first).toContain('href="/parts?q=a&amp;sort=name"');
  expect(first).not.toContain("aria-sort");
  const up = await table("/parts?sort=name");
  expect(up).toMatch(/aria-sort="ascending"/);
  expect(up).toContain('href="/parts?sort=-name"');
  const down = await table("/parts?sort=-name");
  expect(down).toMatch(/aria-sort="descending"/);
  expect(down).toContain('href="/parts?sort=name"');
});

test("search keeps the sort, CSV asks the same question, rows lead on", async () => {
  const markup = await table("/parts?sort=-mass&q=fl&page=2", { searchLabel: "Find a part", csvHref: "/parts.csv", rowHref: (part) => `/parts/${part.id}` });
  expect(markup).toMatch(/<input type="hidden" name="sort" value="-mass"/);
  expect(markup).toMatch(/name="q"[^>]*value="fl"|value="fl"[^>]*name="q"/);
  expect(markup).toContain('href="/parts.csv?sort=-mass&amp;q=fl"');
  expect(markup).toContain('href="/parts/p2"');
});

test("pages are counted; the first has nothing before it, the last nothing after", async () => {
  const paged = { total: 47, pageSize: 20 };
  expect(wordsOf(await table("/parts", paged))).toMatch(/1 to 20 of 47 Further$/);
  expect(wordsOf(await table("/parts?page=2", paged))).toMatch(/21 to 40 of 47 Earlier Further$/);
  expect(wordsOf(await table("/parts?page=3", paged))).toMatch(/41 to 47 of 47 Earlier$/);
  expect(wordsOf(await table("/parts", { total: 20, pageSize: 20 }))).not.toContain("of 20");
});

test("an empty table says what to do; a search without a hit offers all", async () => {
  expect(wordsOf(await table("/parts", { rows: [] }))).toContain("No part yet.");
  const none = await table("/parts?q=zz&sort=name", { rows: [] });
  expect(wordsOf(none)).toContain("Nothing matches “zz”.");
  expect(none).toContain('href="/parts?sort=name"');
});
