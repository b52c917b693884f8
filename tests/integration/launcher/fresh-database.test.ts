import pg from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { freshDatabase, type FreshDatabase } from "#tests/support/database.ts";

let one: FreshDatabase;
let other: FreshDatabase;

beforeAll(async () => { [one, other] = await Promise.all([freshDatabase(), freshDatabase()]); });
afterAll(async () => { await Promise.all([one.drop(), other.drop()]); });

async function query(url: string, text: string): Promise<Record<string, unknown>[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  return client.query(text).then(({ rows }) => rows).finally(() => client.end());
}

test("the app's role can neither go round row-level security nor own a table", async () => {
  const [role] = await query(one.appUrl, "select rolsuper, rolbypassrls, rolcreaterole, rolcreatedb from pg_roles where rolname = current_user");
  expect(role).toEqual({ rolsuper: false, rolbypassrls: false, rolcreaterole: false, rolcreatedb: false });
  expect(await query(one.appUrl, "select tablename from pg_tables where tableowner = current_user")).toEqual([]);
});

test("it is migrated", async () => {
  expect(await query(one.ownerUrl, "select 1 as found from pg_tables where tablename = 'shops'")).toEqual([{ found: 1 }]);
});

test("what one test file writes, another does not see", async () => {
  await query(one.ownerUrl, "create table seen_here (n int); insert into seen_here values (1)");
  await expect(query(other.ownerUrl, "select n from seen_here")).rejects.toThrow(/does not exist/);
});
