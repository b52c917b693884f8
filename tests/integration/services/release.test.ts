import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Viewer } from "#app/domain/viewer.ts";
import { openClearedRevision, seenOf } from "#tests/support/released.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";

let shop: TestShop;
let owner: Viewer;
let designer: Viewer;

beforeAll(async () => {
  shop = await openTestShop();
  owner = shop.signing(shop.people.owner);
  designer = shop.signing(shop.people.designer);
});
afterAll(() => shop?.close());

const release = async () => (await import("#app/services/release.server.ts")).releaseRevision;
const service = () => import("#app/services/release.server.ts");

async function decisionsOf(revisionId: string): Promise<Array<{ decision: string; letter: string | null; same_person: boolean }>> {
  const { inShop } = await import("#app/data/scope.server.ts");
  return inShop(owner, (tx) => tx("decisions").where({ revision_id: revisionId }).select("decision", "letter", "same_person"));
}

describe("a release", () => {
  test("a complete revision is a go", async () => {
    const at = await openClearedRevision(shop);
    const seen = await seenOf(owner, at.revisionId);
    expect(seen.lines.filter(({ state }) => state !== "met")).toEqual([]);
    expect(seen.verdict).toBe("go");
  });

  test("two owners who click at the same moment: exactly one release", async () => {
    const at = await openClearedRevision(shop);
    await (await service()).proposeRevision(designer, at.revisionId);
    const seen = await seenOf(owner, at.revisionId);
    const releaseRevision = await release();
    const results = await Promise.all([releaseRevision(owner, at.revisionId, seen), releaseRevision({ ...owner, name: "Second owner" }, at.revisionId, seen)]);
    expect(results.map(({ ok }) => ok).sort()).toEqual([false, true]);
    expect(results.find(({ ok }) => !ok)).toMatchObject({ reason: "released" });
    expect(await decisionsOf(at.revisionId)).toEqual([{ decision: "go", letter: "A", same_person: false }]);
  });

  test("a fit check that lands between page and click: nothing is released, and the change is named", async () => {
    const at = await openClearedRevision(shop);
    const seen = await seenOf(owner, at.revisionId);
    expect(await at.tryAgain(true)).toMatchObject({ ok: true });
    const result = await (await release())(owner, at.revisionId, seen);
    expect(result).toMatchObject({ ok: false, reason: "changed" });
    expect("changes" in result && result.changes.join(" ")).toMatch(/fit check/i);
    expect(await decisionsOf(at.revisionId)).toEqual([]);
  });

  test("a release and a fit check at the same moment: never a release that rests on other records than were seen", async () => {
    const { inShop } = await import("#app/data/scope.server.ts");
    for (let round = 0; round < 4; round++) {
      const at = await openClearedRevision(shop);
      const seen = await seenOf(owner, at.revisionId);
      const [released] = await Promise.all([(await release())(owner, at.revisionId, seen), at.tryAgain(false).catch((fault: unknown) => fault)]);
      const rows = await inShop(owner, (tx) => tx("decisions").where({ revision_id: at.revisionId }).select("records_hash"));
      expect(rows).toEqual(released.ok ? [{ records_hash: seen.hash }] : []);
    }
  });

  test("asks for a proof of the last five minutes", async () => {
    const at = await openClearedRevision(shop);
    const seen = await seenOf(owner, at.revisionId);
    const stale = { ...owner, provedAt: new Date(Date.now() - 5 * 60 * 1000 - 1000).toISOString() };
    expect(await (await release())(stale, at.revisionId, seen)).toEqual({ ok: false, reason: "prove" });
    expect(await (await service()).proposeRevision({ ...designer, provedAt: null }, at.revisionId)).toEqual({ ok: false, reason: "prove" });
  });

  test("what is not met is listed, with who can supply it", async () => {
    const at = await openClearedRevision(shop);
    await at.tryAgain(false);
    const result = await (await release())(owner, at.revisionId, await seenOf(owner, at.revisionId));
    expect(result).toMatchObject({ ok: false, reason: "not-clear" });
    expect("missing" in result && result.missing.length).toBeGreaterThan(0);
  });

  test("a concession with its limit lets it through and is kept with the decision; one person alone is said", async () => {
    const at = await openClearedRevision(shop);
    await at.tryAgain(false);
    const { concedeLines } = await service();
    expect(await concedeLines(owner, at.revisionId, { lines: ["fit"], reason: "one stud is bent on the ring", limitPieces: 1, limitUntil: null, outsideApproval: null })).toEqual({ ok: true });
    expect(await (await release())(owner, at.revisionId, await seenOf(owner, at.revisionId))).toMatchObject({ ok: true });
    expect(await decisionsOf(at.revisionId)).toEqual([{ decision: "go with concession", letter: "A", same_person: true }]);
  });

  test("a no-go keeps its reason, takes the revision back from the gate, and can be followed by a go", async () => {
    const at = await openClearedRevision(shop);
    const { proposeRevision, refuseRevision } = await service();
    await proposeRevision(designer, at.revisionId);
    expect(await refuseRevision(owner, at.revisionId, "wait for the new ring")).toEqual({ ok: true });
    expect(await (await release())(owner, at.revisionId, await seenOf(owner, at.revisionId))).toMatchObject({ ok: true, letter: "A" });
    expect((await decisionsOf(at.revisionId)).map(({ decision }) => decision).sort()).toEqual(["go", "no-go"]);
  });

  test("forged records don't pass for the ones that were seen", async () => {
    const at = await openClearedRevision(shop);
    const result = await (await release())(owner, at.revisionId, { hash: "f".repeat(64), records: { nonsense: true }, reason: "" });
    expect(result).toMatchObject({ ok: false, reason: "changed" });
  });
});
