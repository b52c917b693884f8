import { spawn, spawnSync } from "node:child_process";
import { copyFileSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { afterAll, describe, expect, test } from "vitest";
import { binaryStl, torus } from "./solids.ts";

const root = fileURLToPath(new URL("../../../", import.meta.url));
const models = join(root, "tests/support/models");
const folder = mkdtempSync(join(tmpdir(), "measure-"));
afterAll(() => rmSync(folder, { recursive: true }));

/** The command as a person gives it, standing in `from`. */
function measure(words: string[], from = models) {
  const { status, stdout, stderr } = spawnSync("npm", ["run", "-s", "measure", "--prefix", root, "--", ...words], { cwd: from, encoding: "utf8", env: { ...process.env, INIT_CWD: from } });
  return { status, stdout, stderr };
}

test("prints one document, from where the person stands", () => {
  const { status, stdout, stderr } = measure(["Cube 10x10.stl"], join(models, "stl"));
  expect(stderr).toBe("");
  expect(status).toBe(0);
  expect(JSON.parse(stdout)).toEqual({
    file: { name: "Cube 10x10.stl", bytes: 684, sha256: "8db02eae783342b13f451cd0abdc0f589107298832c7e1d3f6f358dbc5e3dccb", format: "stl-binary" },
    unit: { source: "mm", assumed: true },
    warnings: [],
    mesh: { triangles: 12, degenerateTriangles: 0, shells: 1, openEdges: 0, nonManifoldEdges: 0, misorientedEdges: 0, closed: true, oriented: true },
    bounds_mm: expect.objectContaining({ size: [10, 10, 10] }),
    area_mm2: 600,
    volume_mm3: 1000,
    centroid_mm: expect.any(Array),
    inertia_mm5: expect.any(Array),
    solid: null,
    holes: [],
    patterns: [],
    smallestInsideRadius_mm: null,
    thinnestWall_mm: null,
  });
});

test("takes the unit, before or after the file", () => {
  for (const words of [["stl/featuretype.STL", "--unit", "in"], ["--unit=in", "stl/featuretype.STL"]]) {
    const document = JSON.parse(measure(words).stdout);
    expect(document.unit).toEqual({ source: "in", assumed: false });
    expect(document.bounds_mm.size[0]).toBeCloseTo(127, 3);
  }
});

test("goes by content, not by name", () => {
  copyFileSync(join(models, "stl/plate_holes.STL"), join(folder, "plate.step"));
  expect(JSON.parse(measure(["plate.step"], folder).stdout).file).toMatchObject({ name: "plate.step", format: "stl-binary" });
});

test("a large file is hashed beside the measuring: the same hash", () => {
  writeFileSync(join(folder, "large.stl"), binaryStl(torus(50, 20, 600, 150)));
  const { file, mesh } = JSON.parse(measure(["large.stl"], folder).stdout);
  expect(file).toEqual({ name: "large.stl", bytes: 9_000_084, format: "stl-binary", sha256: expect.stringMatching(/^[0-9a-f]{64}$/) });
  expect(file.sha256).toBe(spawnSync("sha256sum", [join(folder, "large.stl")], { encoding: "utf8" }).stdout.slice(0, 64));
  expect(mesh).toMatchObject({ triangles: 180_000, closed: true, oriented: true, shells: 1 });
});

test("a closed pipe is no fault and shows no stack", async () => {
  const command = spawn(process.execPath, ["--import", "tsx", "scripts/measure.ts", join(models, "stl/soup.stl")], { cwd: root, stdio: ["ignore", "pipe", "pipe"] });
  command.stdout.destroy();
  let said = "";
  command.stderr.on("data", (chunk) => (said += chunk));
  const code = await new Promise((settle) => command.on("close", settle));
  expect(said).toBe("");
  expect(code).toBe(0);
});

describe("bad input: exit code 2, one line that names what is wrong, nothing else", () => {
  mkdirSync(join(folder, "a-folder"));
  // As large as files that are hashed in a thread of their own: it must not keep the command alive.
  writeFileSync(join(folder, "cut.stl"), binaryStl(torus(50, 20, 600, 150)).subarray(0, 9_000_000));
  test.each([
    [["bad/bin-nan-vertex.stl"], models, /bad\/bin-nan-vertex\.stl: .*not a number/],
    [["bad/zero-bytes.stl"], models, /zero-bytes\.stl: .*empty/],
    [["bad/html-page.stl"], models, /html-page\.stl: .*web page/],
    [["cut.stl"], folder, /cut\.stl: .*promises 180,000 triangles/],
    [["not-there.stl"], folder, /not-there\.stl: no such file/],
    [["a-folder"], folder, /a-folder: is not a file/],
    [[], folder, /no file named; usage/],
    [["a.stl", "b.stl"], folder, /one file at a time/],
    [["--colour", "a.stl"], folder, /unknown option --colour/],
    [["a.stl", "--unit", "cm"], folder, /--unit must be mm or in, not "cm"/],
    [["a.stl", "--unit"], folder, /--unit must be mm or in/],
  ])("%j", (words, from, line) => {
    const { status, stdout, stderr } = measure(words, from);
    expect(status).toBe(2);
    expect(stdout).toBe("");
    expect(stderr).toMatch(line);
    expect(stderr).toMatch(/^measure: [^\n]+\n$/);
  });
});
