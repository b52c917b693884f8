import { spawn } from "node:child_process";
import { mkdirSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from "node:fs";
import net, { type AddressInfo } from "node:net";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { hashOf, missingPackages } from "#scripts/launcher/freshness.mjs";
import { parseDotEnv } from "#scripts/launcher/house.mjs";
import { readJson, takeLock, whileLocked, writePrivately } from "#scripts/launcher/locks.mjs";
import { freePort, freePorts } from "#scripts/launcher/ports.mjs";
import { neededFakes } from "#scripts/launcher/stack.mjs";

let folder: string;
beforeAll(() => { folder = mkdtempSync(path.join(tmpdir(), "spotblue-unit-")); });
afterAll(() => rmSync(folder, { recursive: true }));
const at = (name: string) => path.join(folder, name);

describe("a port", () => {
  test("that is taken gives way to the next", async () => {
    const server = net.createServer();
    await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
    const taken = (server.address() as AddressInfo).port;
    const port = await freePort(taken);
    expect(port).not.toBe(taken);
    await new Promise((resolve) => server.close(resolve));
    expect(await freePort(taken)).toBe(taken);
  });

  test("that another service of ours was promised is not given out again", async () => {
    const wanted = await freePort();
    expect(await freePort(wanted, new Set([wanted]))).not.toBe(wanted);
  });

  test("is never given twice in one asking", async () => {
    const ports = await freePorts(20);
    expect(new Set(ports).size).toBe(20);
  });
});

describe("a lock", () => {
  test("names its holder while that lives", () => {
    const lock = takeLock(at("held"));
    expect(lock.holder).toBeUndefined();
    expect(takeLock(at("held")).holder?.pid).toBe(process.pid);
    lock.release();
    expect(takeLock(at("held")).holder).toBeUndefined();
  });

  test("of a process that is gone is taken over, with what it had noted", async () => {
    const child = spawn(process.execPath, ["-e", ""]);
    await new Promise((resolve) => child.once("exit", resolve));
    writeFileSync(at("stale"), JSON.stringify({ pid: child.pid, begin: "1", children: [{ name: "worker" }] }));
    expect(takeLock(at("stale"))).toMatchObject({ before: { children: [{ name: "worker" }] } });
  });

  test("of another process that got the same pid is taken over", () => {
    writeFileSync(at("reused"), JSON.stringify({ pid: process.pid, begin: "1" }));
    expect(takeLock(at("reused")).holder).toBeUndefined();
  });

  test("that was cut off while being written is taken over", () => {
    writeFileSync(at("half"), '{"pid":');
    expect(takeLock(at("half")).holder).toBeUndefined();
  });

  test("lets one work at a time, and the next when the first failed", async () => {
    const order: string[] = [];
    const slow = whileLocked(at("turn"), async () => { order.push("first in"); await new Promise((resolve) => setTimeout(resolve, 50)); order.push("first out"); throw new Error("failed"); });
    const next = whileLocked(at("turn"), async () => { order.push("second in"); });
    await expect(slow).rejects.toThrow("failed");
    await next;
    expect(order).toEqual(["first in", "first out", "second in"]);
  });
});

test("what holds passwords can be read by its owner only", () => {
  writePrivately(at("secrets.json"), '{"a":1}');
  expect(statSync(at("secrets.json")).mode & 0o777).toBe(0o600);
  expect(readJson(at("secrets.json"))).toEqual({ a: 1 });
  expect(readJson(at("nowhere.json"))).toBeUndefined();
});

describe("the hash of what a build is made from", () => {
  test("changes with a file's text, its name and its place, and with nothing else", () => {
    const place = at("hashed");
    mkdirSync(path.join(place, "app/domain"), { recursive: true });
    writeFileSync(path.join(place, "app/domain/a.ts"), "one");
    const hash = () => hashOf(["app", "missing.json"], place);
    const first = hash();
    writeFileSync(path.join(place, "other"), "not asked for");
    expect(hash()).toBe(first);
    writeFileSync(path.join(place, "app/domain/a.ts"), "two");
    const changed = hash();
    expect(changed).not.toBe(first);
    writeFileSync(path.join(place, "app/domain/a.ts"), "one");
    expect(hash()).toBe(first);
    rmSync(path.join(place, "app/domain/a.ts"));
    writeFileSync(path.join(place, "app/a.ts"), "one");
    expect(hash()).not.toBe(first);
  });
});

describe("packages are complete", () => {
  const lock = { packages: { "": {}, "node_modules/a": { version: "1.0.0" }, "node_modules/b": { version: "2.0.0" }, "node_modules/other-system": { version: "1.0.0", optional: true } } };
  const clone = (name: string, installed?: object) => {
    mkdirSync(at(`${name}/node_modules`), { recursive: true });
    writeFileSync(at(`${name}/package-lock.json`), JSON.stringify(lock));
    if (installed) writeFileSync(at(`${name}/node_modules/.package-lock.json`), JSON.stringify({ packages: installed }));
    return at(name);
  };

  test("when npm's own list has what the lock file has", () => {
    expect(missingPackages(clone("whole", { "node_modules/a": { version: "1.0.0" }, "node_modules/b": { version: "2.0.0" } }))).toEqual([]);
  });
  test("not when one is of another version", () => {
    expect(missingPackages(clone("old", { "node_modules/a": { version: "0.9.0" }, "node_modules/b": { version: "2.0.0" } }))).toEqual(["node_modules/a"]);
  });
  test("not when an install was cut off: npm writes its list last", () => {
    expect(missingPackages(clone("cut"))).toEqual(["node_modules/a", "node_modules/b"]);
  });
});

test("a settings file is read line by line", () => {
  expect(parseDotEnv("# note\nA=1\nexport B = \"two # three\"\nC='x'\nD=four # note\nE=\nnot a setting\nF=a=b\r\n")).toEqual({ A: "1", B: "two # three", C: "x", D: "four", E: "", F: "a=b" });
});

describe("a stand-in starts", () => {
  test("for every service that is not configured", () => {
    expect(neededFakes({ S3_BUCKET: "", SMTP_URL: undefined })).toEqual({ database: true, store: true, mail: true, github: true });
  });
  test.each([
    ["database", { DATABASE_URL: "postgres://db.example/spotblue" }],
    ["store", { S3_ENDPOINT: "https://store.example" }],
    ["store", { S3_BUCKET: "files" }],
    ["mail", { SMTP_URL: "smtps://mail.example" }],
    ["github", { GITHUB_CLIENT_ID: "id" }],
  ] as const)("but not for a %s that is", (name, given) => {
    const { [name]: needed, ...others } = neededFakes(given);
    expect(needed).toBe(false);
    expect(Object.values(others)).toEqual([true, true, true]);
  });
  test("never in a deployment", () => {
    expect(Object.values(neededFakes({ APP_MODE: "deployment" }))).toEqual([false, false, false, false]);
  });
});

test("nothing that starts before the install needs a package", () => {
  const sources = ["start.mjs", "test.mjs", ...["cluster", "debian", "freshness", "house", "locks", "ports", "postgres-binaries", "processes", "services", "stack", "steps", "stop-signals", "suites", "throw-away"].map((name) => `launcher/${name}.mjs`)];
  for (const source of sources) {
    const text = readFileSync(new URL(`../../../scripts/${source}`, import.meta.url), "utf8");
    const imported = [...text.matchAll(/from "([^"]+)"/g)].map(([, name]) => name!);
    expect(imported.filter((name) => !name.startsWith("node:") && !name.startsWith("./")), source).toEqual([]);
  }
});
