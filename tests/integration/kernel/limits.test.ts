import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { tessellateStep } from "#app/kernel/tessellate-step.server.ts";
import { expected, measure, models, stepFilesIn } from "./model-files.ts";

const slow = "step/nist_ctc_02_asme1_ap242-e2.stp";

describe("damaged and odd files", () => {
  test.each(stepFilesIn("bad"))("%s", async (file) => {
    const verdict = expected[file]!.expect;
    const answer = await measure(file).catch((error: unknown) => error);
    if (answer instanceof Error) {
      expect(answer).toBeInstanceOf(UnreadableModel);
      // One line for a person that says what to do, no trace of the machinery.
      expect(answer.message).toMatch(/; |\. /);
      expect(answer.message).not.toMatch(/\n|node:|wasm|undefined|\bat /);
      expect(verdict).toMatch(/refuse/);
      return;
    }
    const found = answer as Awaited<ReturnType<typeof measure>>;
    if (verdict === "refuse") expect.fail(`${file} was to be refused`);
    if (/warn/.test(verdict!)) expect(found.warnings).not.toEqual([]);
    if (verdict === "accept") expect(found.warnings).toEqual([]);
    if (found.solid!.solids === 0) expect([found.volume_mm3, found.area_mm2, found.bounds_mm]).toEqual([null, null, null]);
  });

  test.each(["bad/step-comments-inside.step", "bad/step-latin1-and-x2-names.step", "bad/step-self-reference.step"])("%s is the block it was made from", async (file) => {
    expect((await measure(file)).volume_mm3).toBeCloseTo(expected["step/cube_hole.step"]!.volume_mm3!, 3);
  });

  test("a unit that is not stated is said to be assumed", async () => {
    const found = await measure("bad/step-no-unit.step");
    expect(found.unit).toEqual({ source: "mm", assumed: true });
    expect(found.warnings.join()).toContain("does not state its unit");
  });

  test("an invalid solid is said to be, with the place", async () => {
    const found = await measure("bad/step-zero-radius.step");
    expect(found.solid!.valid).toBe(false);
    expect(found.warnings.join()).toMatch(/face near \(25\.40, 12\.70, 12\.70\) mm/);
  });
});

describe("limits", () => {
  test("time", async () => {
    const started = performance.now();
    await expect(measure(slow, { timeLimit_ms: 700 })).rejects.toThrow(/took longer than 700 ms/);
    expect(performance.now() - started).toBeLessThan(5000);
  });

  test("memory", async () => {
    // The kernel alone needs more.
    await expect(measure(slow, { memoryLimit: 120 * 1024 ** 2 })).rejects.toThrow(/more than 120 MB of memory/);
  });

  test("whoever asked may change their mind", async () => {
    const abort = new AbortController();
    const running = measure(slow, { signal: abort.signal, onProgress: (share) => share > 0 && abort.abort(new Error("no longer wanted")) });
    await expect(running).rejects.toThrow("no longer wanted");
    await expect(measure(slow, { signal: abort.signal })).rejects.toThrow("no longer wanted");
  });

  test("a file that breaks the kernel breaks only its own: the next is measured", async () => {
    const [broken, sound] = await Promise.allSettled([measure("bad/step-deep-parentheses.step", {}), measure("step/cube_hole.step", {})]);
    expect(broken).toMatchObject({ status: "rejected", reason: { name: "UnreadableModel", message: expect.stringContaining("broke the geometry kernel") } });
    expect(sound).toMatchObject({ status: "fulfilled", value: { solid: { solids: 1 } } });
  });

  test("no process stays behind", async () => {
    await measure(slow, { timeLimit_ms: 500 }).catch(() => {});
    await expect.poll(() => kernelProcesses(), { timeout: 3000 }).toEqual([]);
  });
});

test("a mesh is refused for the same reasons", async () => {
  await expect(tessellateStep(join(models, "bad/step-cut-in-half.step"), { chord_mm: 0.1 })).rejects.toThrow(/cut short/);
  await expect(tessellateStep(join(models, "step/s1-c5-214.stp"), { chord_mm: 0.1 })).rejects.toThrow(/no solid and no surface/);
  await expect(tessellateStep(join(models, "step/cube_hole.step"), { chord_mm: 0 })).rejects.toThrow(RangeError);
});

/** Children of this process that still run a kernel. */
function kernelProcesses(): string[] {
  return readdirSync("/proc").filter((entry) => /^\d+$/.test(entry) && isOurs(Number(entry)));
}
function isOurs(pid: number): boolean {
  try {
    const status = readFileSync(`/proc/${pid}/status`, "utf8");
    return status.includes(`PPid:\t${process.pid}\n`) && readFileSync(`/proc/${pid}/cmdline`, "utf8").includes("kernel-process");
  } catch {
    return false;
  }
}
