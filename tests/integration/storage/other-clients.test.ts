import { execFile } from "node:child_process";
import { createHash, randomBytes } from "node:crypto";
import { mkdir, mkdtemp, readFile, readdir, rm, writeFile } from "node:fs/promises";
import os from "node:os";
import path from "node:path";
import { promisify } from "node:util";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { openEndpoint, type Endpoint } from "./endpoint.ts";

// Clients that we did not write, as Debian packs them: rclone and s3cmd.
const run = promisify(execFile);
let at: Endpoint;
let dir: string;
let environment: NodeJS.ProcessEnv;

async function mustBeInstalled(program: string): Promise<void> {
  await run(program, ["--version"]).catch((error: NodeJS.ErrnoException) => {
    if (error.code === "ENOENT") throw new Error(`${program} is not installed. Install Debian's package of that name: apt-get install ${program}`);
    throw error;
  });
}

beforeAll(async () => {
  await Promise.all(["rclone", "s3cmd"].map(mustBeInstalled));
  at = await openEndpoint();
  dir = await mkdtemp(path.join(os.tmpdir(), "store-clients-"));
  const { endpoint, region, accessKeyId, secretAccessKey } = at.settings;
  environment = {
    PATH: process.env.PATH, HOME: dir, LC_ALL: "C.UTF-8", RCLONE_CONFIG: path.join(dir, "rclone.conf"),
    RCLONE_CONFIG_SHOP_TYPE: "s3", RCLONE_CONFIG_SHOP_PROVIDER: "Other", RCLONE_CONFIG_SHOP_ENDPOINT: endpoint, RCLONE_CONFIG_SHOP_REGION: region,
    RCLONE_CONFIG_SHOP_ACCESS_KEY_ID: accessKeyId, RCLONE_CONFIG_SHOP_SECRET_ACCESS_KEY: secretAccessKey, RCLONE_CONFIG_SHOP_FORCE_PATH_STYLE: "true",
  };
  const { host, protocol } = new URL(endpoint);
  await writeFile(environment.RCLONE_CONFIG!, "");
  await writeFile(path.join(dir, "s3cfg"), `[default]\naccess_key = ${accessKeyId}\nsecret_key = ${secretAccessKey}\nhost_base = ${host}\nhost_bucket = ${host}/%(bucket)\nbucket_location = ${region}\nuse_https = ${protocol === "https:" ? "True" : "False"}\nsignature_v2 = False\nmultipart_chunk_size_mb = 5\n`);
});
afterAll(async () => {
  await at?.close();
  if (dir) await rm(dir, { recursive: true, force: true });
});

const rclone = async (...args: string[]) => (await run("rclone", [...args, "--retries", "1", "--low-level-retries", "1"], { env: environment, maxBuffer: 2 ** 24 })).stdout;
const s3cmd = async (...args: string[]) => (await run("s3cmd", ["-c", path.join(dir, "s3cfg"), "--no-progress", ...args], { env: environment, maxBuffer: 2 ** 24 })).stdout;
const md5 = (bytes: Buffer) => createHash("md5").update(bytes).digest("hex");

async function makeTree(name: string): Promise<{ folder: string; files: Map<string, Buffer> }> {
  const folder = path.join(dir, name);
  const files = new Map<string, Buffer>();
  const add = async (file: string, bytes: Buffer) => {
    await mkdir(path.dirname(path.join(folder, file)), { recursive: true });
    await writeFile(path.join(folder, file), bytes);
    files.set(file, bytes);
  };
  await add("empty.txt", Buffer.alloc(0));
  await add("plate one.stl", randomBytes(70_000));
  await add("job/ünï (2) + 100% & co.step", randomBytes(1_234));
  await add("job/deep/er/x=y;z.json", Buffer.from("{}"));
  await add("large.bin", randomBytes(13 * 1024 * 1024 + 7));
  return { folder, files };
}

async function sameTree(folder: string, files: Map<string, Buffer>): Promise<void> {
  const found = (await readdir(folder, { recursive: true, withFileTypes: true })).filter((entry) => entry.isFile()).map((entry) => path.relative(folder, path.join(entry.parentPath, entry.name)));
  expect(found.sort()).toEqual([...files.keys()].sort());
  for (const [name, bytes] of files) expect((await readFile(path.join(folder, name))).equals(bytes), name).toBe(true);
}

describe("rclone", () => {
  test("copies a folder there and back, in one piece and in parts, and finds no difference", async () => {
    const { folder, files } = await makeTree("rclone-up");
    const remote = `shop:${at.settings.bucket}/${at.prefix}rclone`;
    await rclone("copy", folder, remote, "--s3-upload-cutoff", "8M", "--s3-chunk-size", "5M");
    expect((await rclone("lsf", "-R", "--files-only", remote)).trim().split("\n").sort()).toEqual([...files.keys()].sort());
    await rclone("check", folder, remote, "--download");
    await rclone("check", folder, remote);
    await rclone("copy", remote, path.join(dir, "rclone-down"));
    await sameTree(path.join(dir, "rclone-down"), files);
    // Nothing is sent again when times and sizes agree: they came back as they were given.
    const { stderr } = await run("rclone", ["copy", folder, remote, "--dry-run", "-v"], { env: environment });
    expect(stderr).not.toContain("Skipped copy");
    await writeFile(path.join(folder, "job/deep/er/x=y;z.json"), "[]");
    expect((await run("rclone", ["copy", folder, remote, "--dry-run", "-v"], { env: environment })).stderr).toContain("x=y;z.json: Skipped copy");
  });

  test("moves inside the store, makes the store like a folder, and removes", async () => {
    const { folder, files } = await makeTree("rclone-sync");
    const remote = `shop:${at.settings.bucket}/${at.prefix}rclone-sync`;
    await rclone("copy", folder, remote);
    await rclone("moveto", `${remote}/plate one.stl`, `${remote}/moved.stl`);
    expect((await at.store.hashStored(`${at.prefix}rclone-sync/moved.stl`)).bytes).toBe(70_000);
    expect(await at.store.head(`${at.prefix}rclone-sync/plate one.stl`)).toBeUndefined();
    await rclone("sync", folder, remote);
    expect((await rclone("lsf", "-R", "--files-only", remote)).trim().split("\n").sort()).toEqual([...files.keys()].sort());
    await rclone("purge", remote);
    expect((await at.store.list(`${at.prefix}rclone-sync`).next()).done).toBe(true);
  });

  test("copies from bucket to bucket without fetching, and takes a bucket away", async () => {
    const source = `shop:${at.settings.bucket}/${at.prefix}between`;
    const other = `shop:${at.settings.bucket}-${randomBytes(4).toString("hex")}`;
    const { folder, files } = await makeTree("rclone-between");
    await rclone("copy", folder, source);
    await rclone("mkdir", other);
    const { stderr } = await run("rclone", ["copy", source, other, "-v"], { env: environment });
    expect(stderr.match(/Copied \(server-side copy\)/g)).toHaveLength(files.size);
    await rclone("check", folder, other, "--download");
    await rclone("purge", other);
    expect(await rclone("lsd", "shop:")).not.toContain(other.slice("shop:".length));
  });

  test("a stream of unknown length arrives", async () => {
    const remote = `shop:${at.settings.bucket}/${at.prefix}rclone-rcat`;
    await run("sh", ["-c", `head -c 7000000 /dev/zero | rclone rcat '${remote}'`], { env: environment });
    expect((await at.store.hashStored(`${at.prefix}rclone-rcat`)).bytes).toBe(7_000_000);
  });

  test("a wrong secret is refused", async () => {
    environment.RCLONE_CONFIG_WRONG_TYPE = "s3";
    for (const name of ["PROVIDER", "ENDPOINT", "REGION", "ACCESS_KEY_ID", "FORCE_PATH_STYLE"]) environment[`RCLONE_CONFIG_WRONG_${name}`] = environment[`RCLONE_CONFIG_SHOP_${name}`];
    environment.RCLONE_CONFIG_WRONG_SECRET_ACCESS_KEY = "guessed";
    await expect(rclone("lsf", `wrong:${at.settings.bucket}`)).rejects.toThrow(/SignatureDoesNotMatch/);
  });
});

describe("s3cmd", () => {
  test("puts, lists, tells about, gets and removes", async () => {
    const { folder, files } = await makeTree("s3cmd-up");
    const remote = `s3://${at.settings.bucket}/${at.prefix}s3cmd/`;
    await s3cmd("put", "--recursive", `${folder}/`, remote);
    const listed = await s3cmd("ls", "--recursive", remote);
    for (const [name, bytes] of files) expect(listed).toMatch(new RegExp(`\\s${bytes.byteLength}\\s+\\S+${name.replace(/[.*+?^${}()|[\]\\]/g, "\\$&")}$`, "m"));
    const info = await s3cmd("info", `${remote}plate one.stl`);
    expect(info).toMatch(/File size:\s+70000/);
    expect(info).toContain(md5(files.get("plate one.stl")!));
    await mkdir(path.join(dir, "s3cmd-down"));
    await s3cmd("get", "--recursive", remote, path.join(dir, "s3cmd-down/"));
    await sameTree(path.join(dir, "s3cmd-down"), files);
    await s3cmd("cp", `${remote}plate one.stl`, `${remote}copy.stl`);
    expect((await at.store.hashStored(`${at.prefix}s3cmd/copy.stl`)).bytes).toBe(70_000);
    await s3cmd("del", `${remote}copy.stl`);
    await s3cmd("del", "--recursive", "--force", remote);
    expect((await at.store.list(`${at.prefix}s3cmd/`).next()).done).toBe(true);
  });

  test("sends a large file in parts, and its hash is the file's", async () => {
    const { folder, files } = await makeTree("s3cmd-parts");
    await s3cmd("put", path.join(folder, "large.bin"), `s3://${at.settings.bucket}/${at.prefix}s3cmd-large`);
    expect(await at.store.hashStored(`${at.prefix}s3cmd-large`)).toMatchObject({ sha256: createHash("sha256").update(files.get("large.bin")!).digest("hex") });
    expect((await at.store.head(`${at.prefix}s3cmd-large`))!.etag).toMatch(/-3"$/);
  });

  test("makes a folder there like one here", async () => {
    const { folder, files } = await makeTree("s3cmd-sync");
    const remote = `s3://${at.settings.bucket}/${at.prefix}s3cmd-sync/`;
    await s3cmd("sync", `${folder}/`, remote);
    await rm(path.join(folder, "plate one.stl"));
    files.delete("plate one.stl");
    await s3cmd("sync", "--delete-removed", `${folder}/`, remote);
    await s3cmd("sync", remote, path.join(dir, "s3cmd-sync-down/"));
    await sameTree(path.join(dir, "s3cmd-sync-down"), files);
  });

  test("an address that it signs works, and asks for the bucket's settings end well", async () => {
    await at.store.put(`${at.prefix}s3cmd-signed`, Buffer.from("signed"), { contentType: "text/plain" });
    const info = await s3cmd("info", `s3://${at.settings.bucket}`);
    expect(info).toMatch(/Location:\s+us-east-1/);
    expect((await s3cmd("ls")).trim()).toContain(`s3://${at.settings.bucket}`);
  });
});
