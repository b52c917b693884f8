import { createHash } from "node:crypto";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { canonicalJson } from "#app/domain/canonical.ts";
import { entryHash, FIRST_PREVIOUS_HASH, verifyChain, type ChainedEntry, type LogbookEntry } from "#app/domain/logbook.ts";

function entry(seq: number, more: Partial<LogbookEntry> = {}): LogbookEntry {
  return { shopId: "shop-1", seq, at: "2026-05-04T12:00:00.000Z", actorId: "person-1", actor: "Rin Aldous", action: "print.recorded", subjectType: "print", subjectId: `print-${seq}`, jobId: null, detail: { name: `4.${seq}` }, ...more };
}

function chain(count: number): ChainedEntry[] {
  const entries: ChainedEntry[] = [];
  for (let previousHash = FIRST_PREVIOUS_HASH; entries.length < count; ) {
    const next = entry(entries.length + 1);
    const hash = entryHash(previousHash, next);
    entries.push({ entry: next, previousHash, hash });
    previousHash = hash;
  }
  return entries;
}

test("the hash is SHA-256 over 0x00, the previous hash and the canonical entry", () => {
  const previous = "ab".repeat(32);
  // Worked out by the platform's own SHA-256; 0x00 before a leaf as RFC 6962, section 2.1.
  const expected = createHash("sha256").update(Uint8Array.of(0)).update(Buffer.from(previous, "hex")).update(canonicalJson(entry(1)), "utf8").digest("hex");
  expect(entryHash(previous, entry(1))).toBe(expected);
});

test("a chain that nobody touched is whole, and so is its end alone", () => {
  const entries = chain(20);
  const head = { seq: 20, hash: entries[19]!.hash };
  expect(verifyChain(entries)).toEqual({ ok: true, head });
  expect(verifyChain(entries, { kept: head })).toEqual({ ok: true, head });
  expect(verifyChain(entries.slice(10), { from: { seq: 10, hash: entries[9]!.hash } })).toEqual({ ok: true, head });
  expect(verifyChain([])).toEqual({ ok: true, head: { seq: 0, hash: FIRST_PREVIOUS_HASH } });
});

const entries = chain(30);
const place = fc.integer({ min: 0, max: 28 });

describe("the first bad entry is named", () => {
  test("one field altered", () => {
    const altered: Partial<LogbookEntry>[] = [{ actor: "Somebody" }, { at: "2026-05-04T12:00:00.001Z" }, { action: "x" }, { subjectId: null }, { jobId: "job-1" }, { detail: {} }, { actorId: null }, { subjectType: "y" }];
    fc.assert(
      fc.property(place, fc.constantFrom(...altered), (index, change) => {
        const touched = entries.map((one, at) => (at === index ? { ...one, entry: { ...one.entry, ...change } } : one));
        expect(verifyChain(touched)).toMatchObject({ ok: false, index, seq: index + 1 });
      }),
    );
  });
  test("one altered together with its hash: the next one tells", () => {
    fc.assert(
      fc.property(place, (index) => {
        const changed = entry(index + 1, { actor: "Somebody" });
        const touched = entries.map((one, at) => (at === index ? { ...one, entry: changed, hash: entryHash(one.previousHash, changed) } : one));
        expect(verifyChain(touched)).toMatchObject({ ok: false, index: index + 1 });
      }),
    );
  });
  test("one taken out", () => {
    fc.assert(fc.property(place, (index) => void expect(verifyChain(entries.toSpliced(index, 1))).toMatchObject({ ok: false, index, seq: index + 1 })));
  });
  test("one put in", () => {
    fc.assert(fc.property(place, (index) => void expect(verifyChain(entries.toSpliced(index, 0, entries[index]!))).toMatchObject({ ok: false, index: index + 1 })));
  });
  test("two swapped", () => {
    fc.assert(
      fc.property(place, (index) => {
        const touched = entries.toSpliced(index, 2, entries[index + 1]!, entries[index]!);
        expect(verifyChain(touched)).toMatchObject({ ok: false, index });
      }),
    );
  });
  test("an entry of another shop", () => {
    const foreign = entry(5, { shopId: "shop-2" });
    const touched = entries.map((one, at) => (at === 4 ? { ...one, entry: foreign, hash: entryHash(one.previousHash, foreign) } : one));
    expect(verifyChain(touched)).toMatchObject({ ok: false, index: 4, why: "entry 5 belongs to another shop" });
  });
  test("the end cut off, or all written anew, against a head kept elsewhere", () => {
    const kept = { seq: 30, hash: entries[29]!.hash };
    expect(verifyChain(entries.slice(0, 25))).toMatchObject({ ok: true });
    expect(verifyChain(entries.slice(0, 25), { kept })).toMatchObject({ ok: false, index: 25, seq: 26 });
    expect(verifyChain(entries, { kept: { seq: 12, hash: "0".repeat(64) } })).toMatchObject({ ok: false, index: 11 });
  });
  test("a row damaged beyond plain data", () => {
    const touched = entries.map((one, at) => (at === 3 ? { ...one, entry: entry(4, { detail: { value: NaN } }) } : one));
    expect(verifyChain(touched)).toMatchObject({ ok: false, index: 3 });
  });
});

test("100,000 entries are verified within 5 seconds", () => {
  const many = chain(100_000);
  const started = performance.now();
  expect(verifyChain(many).ok).toBe(true);
  expect(performance.now() - started).toBeLessThan(5000);
});

test("what is no hash is refused", () => {
  for (const wrong of ["", "ab", "AB".repeat(32), "zz".repeat(32)]) expect(() => entryHash(wrong, entry(1))).toThrow(RangeError);
});
