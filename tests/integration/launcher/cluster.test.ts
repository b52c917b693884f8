import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import path from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { startCluster, type Cluster } from "#scripts/launcher/cluster.mjs";
import { makeThrowAwayFolder } from "#scripts/launcher/throw-away.mjs";

let place: Awaited<ReturnType<typeof makeThrowAwayFolder>>;
let running: Cluster[] = [];

beforeEach(async () => { place = await makeThrowAwayFolder(); });
afterEach(async () => {
  await Promise.all(running.map((cluster) => cluster.stop()));
  running = [];
  place.remove();
});

const at = (name: string) => path.join(place.folder, name);

async function start(): Promise<Cluster> {
  const cluster = await startCluster({ dataDir: at("cluster"), secretsFile: at("cluster.json"), logFile: at("log"), throwAway: true });
  running.push(cluster);
  return cluster;
}

async function startWithData(): Promise<Cluster> {
  const cluster = await start();
  await cluster.createDatabase("kept");
  await cluster.sql("create table parts (n int); insert into parts values (42); checkpoint;", "kept");
  return cluster;
}

test("it listens on loopback only, asks for a password, and keeps its data over a restart", async () => {
  const first = await startWithData();
  expect((await first.sql("show listen_addresses")).trim()).toBe("127.0.0.1");
  expect(readFileSync(at("cluster/pg_hba.conf"), "utf8")).not.toMatch(/^(local|host)\b.*\btrust\s*$/m);
  await first.stop();
  const second = await start();
  expect((await second.sql("select n from parts", "kept")).trim()).toBe("42");
});

test("a server whose launcher was killed is ended, and the next one has its data", async () => {
  const first = await startWithData();
  const second = await start();
  await first.handle.ended;
  expect((await second.sql("select n from parts", "kept")).trim()).toBe("42");
});

test("the pid file of a server that was killed does not stop the next one", async () => {
  const first = await startWithData();
  process.kill(first.handle.identity.pid, "SIGKILL");
  await first.handle.ended;
  expect(existsSync(at("cluster/postmaster.pid"))).toBe(true);
  const second = await start();
  expect((await second.sql("select n from parts", "kept")).trim()).toBe("42");
});

test("a pid file whose pid now belongs to something else does not stop the next one, nor harm it", async () => {
  const first = await startWithData();
  await first.stop();
  writeFileSync(at("cluster/postmaster.pid"), `${process.pid}\n${at("cluster")}\n`);
  const second = await start();
  expect((await second.sql("select 1")).trim()).toBe("1");
});

test("a cluster that was half made is made anew", async () => {
  const first = await start();
  await first.stop();
  rmSync(at("cluster/PG_VERSION"));
  const second = await start();
  expect((await second.sql("select 1")).trim()).toBe("1");
});

test("a cluster whose passwords are gone is set aside, not deleted", async () => {
  const first = await startWithData();
  await first.stop();
  rmSync(at("cluster.json"));
  const second = await start();
  await expect(second.sql("select 1", "kept")).rejects.toThrow(/does not exist/);
  const aside = readdirSync(place.folder).filter((name) => name.startsWith("cluster-set-aside-"));
  expect(aside).toHaveLength(1);
  expect(existsSync(at(`${aside[0]}/PG_VERSION`))).toBe(true);
});
