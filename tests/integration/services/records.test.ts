import { RouterContextProvider } from "react-router";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { CharacteristicValues } from "#app/data/characteristics.server.ts";
import type { MatingPartValues } from "#app/data/mating-parts.server.ts";
import type { Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestRevision, openTestShop, type TestShop } from "#tests/support/test-shop.ts";

let shop: TestShop;
let here: { jobId: string; partId: string; revisionId: string };
let owner: Viewer;
let designer: Viewer;
let stranger: Viewer;
let inDesigner: <T>(work: (tx: Tx) => Promise<T>) => Promise<T>;

async function modules() {
  const { inShop, outsideShops } = await import("#app/data/scope.server.ts");
  return {
    inShop,
    outsideShops,
    characteristics: { ...(await import("#app/services/characteristics.server.ts")), ...(await import("#app/data/characteristics.server.ts")) },
    parts: { ...(await import("#app/services/parts.server.ts")), ...(await import("#app/data/parts.server.ts")) },
    matingParts: { ...(await import("#app/services/mating-parts.server.ts")), ...(await import("#app/data/mating-parts.server.ts")) },
    equipment: await import("#app/services/equipment.server.ts"),
    deposit: await import("#app/services/deposit.server.ts"),
    page: await import("#app/services/part-page.server.ts"),
    presets: await import("#app/services/shop-presets.server.ts"),
  };
}

let m: Awaited<ReturnType<typeof modules>>;

beforeAll(async () => {
  shop = await openTestShop();
  m = await modules();
  ({ owner, designer } = shop.people);
  inDesigner = (work) => m.inShop(designer, work);
  here = await openTestRevision(shop);
  const { addPerson } = await import("#app/data/people.server.ts");
  const shopId = await m.outsideShops(async (tx) => {
    const personId = await addPerson(tx, { name: "Other owner", email: "owner@elsewhere.example", passwordHash: null });
    const { rows } = await tx.raw<{ rows: Array<{ id: string }> }>("select scope.found_shop('Elsewhere', 'EUR', ?) as id", [personId]);
    return rows[0]!.id;
  });
  stranger = { ...owner, shopId, roles: ["owner", "designer"] };
});

afterAll(() => shop.close());

const bore: CharacteristicValues = {
  name: "Pilot bore", kind: "limits", nominalMm: 64, lowerMm: 64, upperMm: 64.03, fitClass: null, printLowerMm: 64, printUpperMm: 64.2, question: "", method: "bore gauge",
  places: 3, matingPartId: null, required: true, critical: true, photoRequired: false, provableOnPrint: true,
};

const notFound = (error: unknown) => error instanceof Response && error.status === 404;
const refusedAsMissing = async (work: Promise<unknown>) => expect(await work.then(() => false, notFound)).toBe(true);
const made = <T extends { ok: boolean }>(result: T): T & { ok: true; id: string } => (expect(result.ok).toBe(true), result as T & { ok: true; id: string });

describe("characteristics", () => {
  const add = (values: Partial<CharacteristicValues> = {}) => inDesigner((tx) => m.characteristics.createCharacteristic(tx, designer, here.partId, { ...bore, ...values }));
  const find = (id: string) => inDesigner((tx) => m.characteristics.findCharacteristic(tx, id));

  test("a class is kept with its limits, which the gate judges by", async () => {
    const { id } = made(await add({ name: "Spigot", kind: "fit", nominalMm: 25, fitClass: "H7", lowerMm: null, upperMm: null }));
    // ISO 286-2:2010, table 6: 25 H7 is +21/0 µm.
    expect(await find(id)).toMatchObject({ lowerMm: 25, upperMm: 25.021, fitClass: "H7" });
  });

  test("a class outside the tables is refused, not guessed", async () => {
    expect(await add({ kind: "fit", nominalMm: 25, fitClass: "Q7" })).toEqual({ ok: false, reason: "no-such-class" });
  });

  test("the second saver is told what stands there now, and nothing is lost", async () => {
    const { id } = made(await add());
    const edit = (rowVersion: number, name: string) => inDesigner((tx) => m.characteristics.editCharacteristic(tx, designer, id, rowVersion, { ...bore, name }));
    expect((await edit(1, "Pilot bore, upper")).ok).toBe(true);
    const second = await edit(1, "Pilot bore, lower");
    expect(second).toMatchObject({ ok: false, reason: "changed", current: { name: "Pilot bore, upper", rowVersion: 2 } });
    expect((await find(id))?.name).toBe("Pilot bore, upper");
  });

  test("hardware of another job can't be named", async () => {
    const elsewhere = await openTestRevision(shop);
    const matingPartId = await inDesigner((tx) => m.matingParts.takeInMatingPart(tx, designer, elsewhere.jobId, hub));
    expect(await add({ matingPartId })).toEqual({ ok: false, reason: "no-such-mating-part" });
  });

  test("once tried, a size can't become a question", async () => {
    const { id } = made(await add({ name: "Tried" }));
    await inDesigner(async (tx) => {
      const matingPartId = await m.matingParts.takeInMatingPart(tx, designer, here.jobId, hub);
      const of = { shop_id: designer.shopId, job_id: here.jobId, revision_id: here.revisionId };
      const [print] = await tx("prints").insert({ ...of, ordinal: 1, preset_name: "Fit check", whole: true, model_sha256: "a".repeat(64), by_name: "Ines" }).returning("id");
      const [check] = await tx("fit_checks").insert({ ...of, print_id: print.id, mating_part_id: matingPartId, draft_key: "one", by_name: "Ines" }).returning("id");
      await tx("fit_results").insert({ ...of, fit_check_id: check.id, characteristic_id: id, readings_mm: [64.1] });
    });
    const edit = (values: Partial<CharacteristicValues>) => inDesigner((tx) => m.characteristics.editCharacteristic(tx, designer, id, 1, { ...bore, ...values }));
    expect(await edit({ kind: "yes-no", question: "Does it drop on?" })).toEqual({ ok: false, reason: "tried" });
    expect((await edit({ kind: "min", upperMm: null, printUpperMm: null })).ok).toBe(true);
  });

  test("moving up and down keeps one order, and stops at its ends", async () => {
    const other = await openTestRevision(shop);
    const ids: string[] = [];
    for (const name of ["a", "b", "c"]) ids.push(made(await inDesigner((tx) => m.characteristics.createCharacteristic(tx, designer, other.partId, { ...bore, name }))).id);
    const move = (id: string, by: 1 | -1, partId = other.partId) => inDesigner((tx) => m.characteristics.moveCharacteristic(tx, designer, id, by, partId));
    const order = async () => (await inDesigner((tx) => m.characteristics.listCharacteristics(tx, other.partId))).map(({ name }) => name).join("");
    await move(ids[2]!, -1);
    expect(await order()).toBe("acb");
    await move(ids[0]!, -1);
    expect(await order()).toBe("acb");
    await move(ids[0]!, 1);
    expect(await order()).toBe("cab");
    await inDesigner((tx) => m.characteristics.putCharacteristicAside(tx, designer, ids[0]!, true));
    await move(ids[1]!, -1);
    expect(await order()).toBe("bc");
    await refusedAsMissing(move(ids[1]!, 1, here.partId));
  });

  test("another shop's characteristic is not there", async () => {
    const { id } = made(await add());
    await refusedAsMissing(m.inShop(stranger, (tx) => m.characteristics.editCharacteristic(tx, stranger, id, 1, bore)));
    await refusedAsMissing(m.inShop(stranger, (tx) => m.characteristics.createCharacteristic(tx, stranger, here.partId, bore)));
    expect((await find(id))?.rowVersion).toBe(1);
  });
});

describe("the part's page", () => {
  test("a customer sees the part and what was shown, not what the gate asks nor how it is tried", async () => {
    const customer: Viewer = { ...shop.people.customer, jobs: [here.jobId] };
    const before = await m.inShop(customer, (tx) => m.page.loadPartPage(tx, customer, here.partId));
    expect(before).toMatchObject({ characteristics: null, revisions: [], mayWrite: false, facts: { service: null, asks: null } });
    const { shareRevision } = await import("#app/data/revisions.server.ts");
    await inDesigner((tx) => shareRevision(tx, here.revisionId));
    const after = await m.inShop(customer, (tx) => m.page.loadPartPage(tx, customer, here.partId));
    expect(after.revisions.map(({ ordinal }) => ordinal)).toEqual([1]);
    await refusedAsMissing(m.inShop({ ...customer, jobs: [] }, (tx) => m.page.loadPartPage(tx, { ...customer, jobs: [] }, here.partId)));
  });

  test("a rotor says that its speed is not stated", async () => {
    const part = await inDesigner((tx) => m.parts.createPart(tx, designer, here.jobId, { number: "R-1", name: "Rotor", kit: "rotor", materialId: null, quantity: 1, speedRpm: null, pressureMPa: null, temperatureC: null, fluid: null, lifting: false }));
    const page = await inDesigner((tx) => m.page.loadPartPage(tx, designer, made(part).id));
    expect(page.facts.toState).toEqual(["speed"]);
  });
});

const hub: MatingPartValues = { name: "Rear hub", description: "", cameInOn: "2026-10-05", conditionIn: "clean", wentOutOn: null, conditionOut: "" };

describe("mating parts", () => {
  test("a measurement takes the instrument's uncertainty of its day, and keeps it", async () => {
    const [matingPartId, instrumentId] = await inDesigner(async (tx) => {
      const instrument = await m.equipment.saveInstrument(tx, designer, null, { name: "Caliper", kind: "caliper", resolutionMm: 0.01, uncertaintyMm: 0.03, trust: "unverified", calibratedUntil: null, checkedOn: null, checkedWith: "" });
      return [await m.matingParts.takeInMatingPart(tx, designer, here.jobId, hub), made(instrument).id] as const;
    });
    await inDesigner((tx) => m.matingParts.measureMatingPart(tx, designer, matingPartId, { name: "Bore", valueMm: 63.994, instrumentId, note: "" }));
    await inDesigner((tx) => m.equipment.saveInstrument(tx, designer, { id: instrumentId, rowVersion: 1 }, { name: "Caliper", kind: "caliper", resolutionMm: 0.01, uncertaintyMm: 0.05, trust: "unverified", calibratedUntil: null, checkedOn: null, checkedWith: "" }));
    const [measured] = await inDesigner((tx) => m.matingParts.listMeasurements(tx, matingPartId));
    expect(measured).toMatchObject({ valueMm: 63.994, uncertaintyMm: 0.03, instrument: "Caliper", setAside: false });

    await inDesigner((tx) => m.matingParts.putMeasurementAside(tx, designer, matingPartId, measured!.id, true));
    expect((await inDesigner((tx) => m.matingParts.listMeasurements(tx, matingPartId)))[0]).toMatchObject({ valueMm: 63.994, setAside: true });
  });

  test("a measurement is set aside from its own page only, and in its own shop only", async () => {
    const [one, other] = await inDesigner(async (tx) => [await m.matingParts.takeInMatingPart(tx, designer, here.jobId, hub), await m.matingParts.takeInMatingPart(tx, designer, here.jobId, hub)] as const);
    const measured = made(await inDesigner((tx) => m.matingParts.measureMatingPart(tx, designer, one, { name: "Bore", valueMm: 64, instrumentId: null, note: "" })));
    await refusedAsMissing(inDesigner((tx) => m.matingParts.putMeasurementAside(tx, designer, other, measured.id, true)));
    await refusedAsMissing(m.inShop(stranger, (tx) => m.matingParts.putMeasurementAside(tx, stranger, one, measured.id, true)));
    expect(await inDesigner((tx) => m.matingParts.measureMatingPart(tx, designer, one, { name: "Bore", valueMm: 64, instrumentId: "00000000-0000-4000-8000-000000000000", note: "" }))).toEqual({ ok: false, reason: "no-such-instrument" });
  });

  test("custody is not overwritten by a second saver", async () => {
    const id = await inDesigner((tx) => m.matingParts.takeInMatingPart(tx, designer, here.jobId, hub));
    const edit = (values: Partial<MatingPartValues>) => inDesigner((tx) => m.matingParts.editMatingPart(tx, designer, id, 1, { ...hub, ...values }));
    expect((await edit({ wentOutOn: "2026-11-01", conditionOut: "as it came" })).ok).toBe(true);
    expect(await edit({ conditionIn: "dented" })).toMatchObject({ ok: false, current: { wentOutOn: "2026-11-01", conditionIn: "clean" } });
  });
});

describe("the deposit", () => {
  const pay = (amountMinor: number) => m.inShop(owner, (tx) => m.deposit.recordPayment(tx, owner, here.jobId, { amountMinor, paidOn: "2026-11-12", how: "bank transfer", note: "" }));

  test("no more is given back than came", async () => {
    expect((await pay(48_000)).ok).toBe(true);
    expect(await pay(-48_001)).toEqual({ ok: false, reason: "more-than-came", paidMinor: 48_000 });
    expect((await pay(-48_000)).ok).toBe(true);
    expect(await pay(-1)).toEqual({ ok: false, reason: "more-than-came", paidMinor: 0 });
  });

  test("two refunds at once are counted one after the other", async () => {
    expect((await pay(10_000)).ok).toBe(true);
    const both = await Promise.all([pay(-10_000), pay(-10_000)]);
    expect(both.filter(({ ok }) => ok)).toHaveLength(1);
  });

  test("an agreement is not overwritten unseen", async () => {
    const agree = (rowVersion: number, depositAgreedMinor: number) => m.inShop(owner, (tx) => m.deposit.agreeDeposit(tx, owner, here.jobId, rowVersion, { depositAgreedMinor, depositNoneReason: null }));
    expect((await agree(1, 48_000)).ok).toBe(true);
    expect(await agree(1, 60_000)).toMatchObject({ ok: false, reason: "changed", current: { depositAgreedMinor: 48_000 } });
  });

  test("money is in no answer to a designer or machinist: not on the job's page, not in the list, not in the logbook", async () => {
    const { visitContext } = await import("#app/http/context.server.ts");
    const job = await import("#app/routes/job.tsx");
    const jobs = await import("#app/routes/jobs.tsx");
    const depositRoute = await import("#app/routes/deposit.tsx");
    const ask = (viewer: Viewer, loader: (args: never) => Promise<unknown>) => {
      const context = new RouterContextProvider();
      const url = new URL(`http://127.0.0.1/jobs/${here.jobId}`);
      context.set(visitContext, { url, method: "GET", address: "", userAgent: "", session: null, viewer });
      return loader({ request: new Request(url), params: { jobId: here.jobId }, context } as never);
    };
    const machinist: Viewer = { ...shop.people.machinist, jobs: [here.jobId] };
    expect(JSON.stringify(await ask(owner, job.loader))).toContain("480.00");
    for (const viewer of [designer, machinist]) {
      const shown = JSON.stringify([await ask(viewer, job.loader), await ask(viewer, jobs.loader)]);
      expect(shown).toContain("Test job");
      expect(shown).not.toMatch(/480\.00|48000|depositAgreed/);
      await expect(ask(viewer, depositRoute.loader)).rejects.toMatchObject({ status: 403 });
    }
    const entries = await inDesigner((tx) => tx("logbook").where({ job_id: here.jobId }).select("action", "detail"));
    expect(entries.map(({ action }) => action)).toContain("recorded a payment");
    expect(JSON.stringify(entries)).not.toMatch(/48000|10000/);
  });
});

describe("what the shop works with", () => {
  test("presets are given once, and never over what the shop made of them", async () => {
    const count = async () => {
      const { rows } = await inDesigner((tx) => tx.raw("select (select count(*) from instruments) as instruments, (select count(*) from materials) as materials, (select count(*) from print_presets) as presets, (select count(*) from makeability_questions) as questions"));
      return rows[0] as unknown;
    };
    const before = await count();
    await inDesigner((tx) => m.presets.givePresets(tx, designer.shopId));
    expect(await count()).toEqual(before);
    await m.inShop(stranger, (tx) => m.presets.givePresets(tx, stranger.shopId));
    const given = await m.inShop(stranger, (tx) => tx("instruments").select("trust"));
    expect(given.length).toBeGreaterThan(3);
    // Nobody has checked them yet.
    expect(given.every(({ trust }) => trust === "unverified")).toBe(true);
  });

  test("an answered question keeps its words; new words take its place", async () => {
    const { listShopQuestions } = await import("#app/data/questions.server.ts");
    const list = (withSetAside = false) => inDesigner((tx) => listShopQuestions(tx, { withSetAside }));
    const [first] = await list();
    const save = (id: string, rowVersion: number, words: string) => inDesigner((tx) => m.equipment.saveQuestion(tx, designer, { id, rowVersion }, words));
    expect(made(await save(first!.id, first!.rowVersion, "Can every corner be cut?")).id).toBe(first!.id);
    await inDesigner(async (tx) => {
      const of = { shop_id: designer.shopId, job_id: here.jobId, revision_id: here.revisionId };
      const [reply] = await tx("machinist_replies").insert({ ...of, model_sha256: "a".repeat(64), by_name: "Marten" }).returning("id");
      await tx("machinist_answers").insert({ ...of, reply_id: reply.id, question_id: first!.id, stance: "agree", text: "" });
    });
    const next = made(await save(first!.id, first!.rowVersion + 1, "Can every inside corner be cut with a 6 mm cutter?"));
    expect(next.id).not.toBe(first!.id);
    expect((await list())[0]).toMatchObject({ id: next.id, answers: 0 });
    expect((await list(true)).find(({ id }) => id === first!.id)).toMatchObject({ question: "Can every corner be cut?", setAside: true, answers: 1 });
  });

  test("a code belongs to one material, and a preset to a printer of this shop", async () => {
    const steel = { code: "1.2312", name: "Tool steel", densityKgM3: 7800, yieldMPa: null, tensileMPa: null, shearMPa: null, typical: true, source: "" };
    expect((await inDesigner((tx) => m.equipment.saveMaterial(tx, designer, null, steel))).ok).toBe(true);
    expect(await inDesigner((tx) => m.equipment.saveMaterial(tx, designer, null, steel))).toEqual({ ok: false, reason: "code-taken" });
    const theirs = await m.inShop(stranger, (tx) => tx("printers").first("id"));
    const preset = { printerId: theirs.id as string, name: "Fit", material: "PETG", layerMm: 0.2, walls: 3, infillPct: 20, scaleX: 1, scaleY: 1, scaleZ: 1, note: "" };
    expect(await inDesigner((tx) => m.equipment.savePreset(tx, designer, null, preset))).toEqual({ ok: false, reason: "no-such-printer" });
  });

  test("the currency stays once money is recorded; its name may change, by the version it was read at", async () => {
    const save = (rowVersion: number, values: { name: string; currency: string }) => m.inShop(owner, (tx) => m.equipment.saveShop(tx, owner, rowVersion, { ...values, replyTo: null }));
    expect(await save(1, { name: "Keld", currency: "USD" })).toEqual({ ok: false, reason: "money-recorded" });
    expect((await save(1, { name: "Keld and daughters", currency: "EUR" })).ok).toBe(true);
    expect(await save(1, { name: "Keld", currency: "EUR" })).toMatchObject({ ok: false, reason: "changed", current: { name: "Keld and daughters" } });
  });
});
