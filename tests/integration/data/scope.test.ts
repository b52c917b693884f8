import { randomUUID } from "node:crypto";
import knex, { type Knex } from "knex";
import { afterAll, beforeAll, expect, test } from "vitest";
import { openTestRevision, openTestShop, type TestShop } from "#tests/support/test-shop.ts";

let shop: TestShop;
let owner: Knex;
let app: Knex;
let tables: string[];
let at: { jobId: string; partId: string; revisionId: string };

beforeAll(async () => {
  shop = await openTestShop();
  at = await openTestRevision(shop);
  owner = knex({ client: "pg", connection: shop.database.ownerUrl });
  // One connection: whatever a transaction leaves on it, the next one meets.
  app = knex({ client: "pg", connection: shop.database.appUrl, pool: { min: 1, max: 1 } });
  const { rows } = await owner.raw("select table_name from information_schema.columns where table_schema = 'public' and column_name = 'shop_id' order by 1");
  tables = rows.map((row: { table_name: string }) => row.table_name);
});
afterAll(async () => {
  await owner?.destroy();
  await app?.destroy();
  await shop?.close();
});

async function countIn(table: string, settings: { shopId?: string; jobs?: string }): Promise<number> {
  return app.transaction(async (tx) => {
    if (settings.shopId) await tx.raw("select set_config('app.shop_id', ?, true)", [settings.shopId]);
    if (settings.jobs) await tx.raw("select set_config('app.job_ids', ?, true)", [settings.jobs]);
    return Number((await tx(table).count("* as n"))[0]!.n);
  });
}

test("every table with a shop_id is under row-level security, forced", async () => {
  const { rows } = await owner.raw("select relname, relrowsecurity, relforcerowsecurity from pg_class where relnamespace = 'public'::regnamespace and relkind = 'r'");
  const guarded = new Map((rows as Array<{ relname: string; relrowsecurity: boolean; relforcerowsecurity: boolean }>).map((row) => [row.relname, row.relrowsecurity && row.relforcerowsecurity]));
  expect(tables.length).toBeGreaterThan(40);
  expect([...tables, "shops"].filter((table) => !guarded.get(table))).toEqual([]);
});

test("the role the app connects with can't go round it", async () => {
  const { rows } = await owner.raw("select rolsuper, rolbypassrls from pg_roles where rolname = 'spotblue_app'");
  expect(rows).toEqual([{ rolsuper: false, rolbypassrls: false }]);
  const owned = await owner.raw("select tablename from pg_tables where schemaname = 'public' and tableowner = 'spotblue_app'");
  expect(owned.rows).toEqual([]);
});

test("no scope, no rows; another shop's scope, no rows; on a fresh and on a used connection", async () => {
  const { owner: viewer } = shop.people;
  for (const table of [...tables, "shops"]) {
    expect(await countIn(table, {}), `${table}, fresh`).toBe(0);
    await countIn(table, { shopId: viewer.shopId, jobs: "*" });
    expect(await countIn(table, {}), `${table}, after a scoped transaction`).toBe(0);
    expect(await countIn(table, { shopId: randomUUID(), jobs: "*" }), `${table}, another shop`).toBe(0);
    expect(await countIn(table, { jobs: "*" }), `${table}, jobs without a shop`).toBe(0);
  }
});

test("the right scope sees its rows", async () => {
  const scope = { shopId: shop.people.owner.shopId, jobs: "*" };
  for (const table of ["shops", "memberships", "jobs", "parts", "revisions", "customers", "logbook"]) expect(await countIn(table, scope), table).toBeGreaterThan(0);
});

test("people kept to jobs see the rows of those, and nothing that is the whole shop's", async () => {
  const { shopId } = shop.people.owner;
  expect(await countIn("parts", { shopId, jobs: `{${at.jobId}}` })).toBe(1);
  expect(await countIn("parts", { shopId, jobs: `{${randomUUID()}}` })).toBe(0);
  expect(await countIn("parts", { shopId, jobs: "{}" })).toBe(0);
  expect(await countIn("parts", { shopId })).toBe(0);
  for (const table of ["customers", "logbook", "invitations", "mail_outbox"]) expect(await countIn(table, { shopId, jobs: `{${at.jobId}}` }), table).toBe(0);
});

test("a row can't be written into another shop, nor moved there", async () => {
  const { shopId } = shop.people.owner;
  const other = randomUUID();
  const write = (work: (tx: Knex.Transaction) => Promise<unknown>) =>
    app.transaction(async (tx) => {
      await tx.raw("select set_config('app.shop_id', ?, true), set_config('app.job_ids', '*', true)", [shopId]);
      await work(tx);
    });
  await expect(write((tx) => tx("customers").insert({ shop_id: other, name: "stray" }))).rejects.toThrow(/row-level security/);
  await expect(write((tx) => tx("customers").update({ shop_id: other }))).rejects.toThrow(/row-level security/);
});

test("a row of a job points only into its own shop", async () => {
  const { rows } = await owner.raw(`
    select c.conrelid::regclass::text as table from pg_constraint c
    where c.contype = 'f' and c.connamespace = 'public'::regnamespace
      and exists (select 1 from pg_attribute a where a.attrelid = c.confrelid and a.attname = 'shop_id')
      and not exists (select 1 from unnest(c.conkey) k join pg_attribute a on a.attrelid = c.conrelid and a.attnum = k where a.attname = 'shop_id')`);
  // Sessions and their links belong to a person, and to no shop.
  expect((rows as Array<{ table: string }>).map(({ table }) => table).sort()).toEqual(["sessions", "sign_in_links"]);
});
