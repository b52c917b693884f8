// How fast is `measure` of a binary STL against Debian's admesh (a C program that sums in single
// precision)? Whole processes, each less its own time on a file of 12 triangles, taken in turn so
// that a busy machine slows both alike.
//
//   node tests/bench/measure-stl.mjs [--triangles 1000000] [--runs 7] [--large]
//
// --large adds ten times as many triangles: time over the smaller file's, and peak memory.
import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { cpus, tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const GOAL_RATIO = 1.0;
const GOAL_GROWTH = 11;
const GOAL_PEAK_MIB = 1536;

const root = fileURLToPath(new URL("../..", import.meta.url));
const option = (name, fallback) => {
  const at = process.argv.indexOf(`--${name}`);
  return at < 0 ? fallback : Number(process.argv[at + 1]);
};
const triangles = option("triangles", 1_000_000);
const runs = option("runs", 7);
const folder = mkdtempSync(join(tmpdir(), "bench-measure-"));

function generate(count) {
  const file = join(folder, `${count}.stl`);
  const { status, stdout, stderr } = spawnSync(process.execPath, [join(root, "tests/support/models/generate-stl.mjs"), "--triangles", String(count), "--out", file], { encoding: "utf8" });
  if (status !== 0) throw new Error(stderr);
  return { ...JSON.parse(stdout), file };
}

function timed(command, words) {
  const start = process.hrtime.bigint();
  const { status, stdout, stderr, error } = spawnSync(command, words, { cwd: root, encoding: "utf8", maxBuffer: 1 << 26 });
  const seconds = Number(process.hrtime.bigint() - start) / 1e9;
  if (error) throw error;
  if (status !== 0) throw new Error(`${command} ${words.join(" ")}: ${stderr}`);
  return { seconds, stdout };
}

const measure = (file) => timed(process.execPath, ["--import", "tsx", "scripts/measure.ts", file]);
const admesh = (file) => timed("admesh", [file]);
const median = (values) => values.toSorted((p, q) => p - q)[Math.floor(values.length / 2)];

try {
  const small = join(root, "tests/support/models/stl/unit_cube.STL");
  const big = generate(triangles);
  const { mesh, volume_mm3, area_mm2 } = JSON.parse(measure(big.file).stdout);
  if (mesh.triangles !== triangles || Math.abs(volume_mm3 / big.signedVolume - 1) > 1e-6 || Math.abs(area_mm2 / big.area - 1) > 1e-6) throw new Error("measured wrong: no time counts");
  admesh(big.file);

  const seconds = { measure: [], measureSmall: [], admesh: [], admeshSmall: [] };
  for (let run = 0; run < runs; run++) {
    seconds.measure.push(measure(big.file).seconds);
    seconds.admesh.push(admesh(big.file).seconds);
    seconds.measureSmall.push(measure(small).seconds);
    seconds.admeshSmall.push(admesh(small).seconds);
  }
  const ours = median(seconds.measure) - median(seconds.measureSmall);
  const theirs = median(seconds.admesh) - median(seconds.admeshSmall);
  const result = {
    triangles,
    runs,
    cores: cpus().length,
    measure_s: round(ours),
    admesh_s: round(theirs),
    startUp_s: round(median(seconds.measureSmall)),
    ratio: round(ours / theirs),
    goalRatio: GOAL_RATIO,
  };

  if (process.argv.includes("--large")) {
    const large = generate(triangles * 10);
    const peaks = [];
    const times = [];
    for (let run = 0; run < 3; run++) {
      times.push(measure(large.file).seconds);
      peaks.push(peakMiB(large.file));
    }
    result.large = {
      triangles: triangles * 10,
      measure_s: round(median(times) - median(seconds.measureSmall)),
      growth: round((median(times) - median(seconds.measureSmall)) / ours),
      goalGrowth: GOAL_GROWTH,
      peak_MiB: Math.max(...peaks),
      goalPeak_MiB: GOAL_PEAK_MIB,
    };
  }
  console.log(JSON.stringify(result, null, 2));
} finally {
  rmSync(folder, { recursive: true });
}

/** The kernel's own count of the process's largest resident memory. */
function peakMiB(file) {
  const report = join(folder, "report.mjs");
  writeFileSync(report, 'process.on("exit", () => process.stderr.write(`peak ${process.resourceUsage().maxRSS}`));');
  const { stderr } = spawnSync(process.execPath, ["--import", "tsx", "--import", report, "scripts/measure.ts", file], { cwd: root, encoding: "utf8" });
  return Math.round(Number(/peak (\d+)/.exec(stderr)[1]) / 1024);
}

function round(value) {
  return Number(value.toFixed(3));
}
