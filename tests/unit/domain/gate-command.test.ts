import { spawnSync } from "node:child_process";
import { fileURLToPath } from "node:url";
import { describe, expect, test } from "vitest";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { evaluateGate } from "#app/domain/gate.ts";

const root = fileURLToPath(new URL("../../../", import.meta.url));

/** As a person types it, npm and all. */
function gate(input: string, ...args: string[]) {
  const { status, stdout, stderr } = spawnSync("npm", ["run", "-s", "gate", "--", ...args], { cwd: root, input, encoding: "utf8" });
  return { status, stdout, stderr };
}

test("the printed example goes in again and comes out as a go", () => {
  const example = gate("", "--example");
  expect(example).toMatchObject({ status: 0, stderr: "" });
  expect(JSON.parse(example.stdout)).toEqual(exampleGateRecords);
  const run = gate(example.stdout);
  expect(run).toMatchObject({ status: 0, stderr: "" });
  expect(JSON.parse(run.stdout)).toEqual(evaluateGate(exampleGateRecords, new Date()));
});

test("a no-go is an answer, not an error", () => {
  const run = gate(JSON.stringify({ ...exampleGateRecords, prints: [] }));
  expect(run).toMatchObject({ status: 0, stderr: "" });
  const { verdict, lines } = JSON.parse(run.stdout) as ReturnType<typeof evaluateGate>;
  expect(verdict).toBe("no-go");
  expect(lines.filter((line) => line.state === "open").map((line) => line.line)).toEqual(["print", "fit"]);
});

describe("bad input: nothing on stdout, one line on stderr that names the key, exit code 2", () => {
  const withPrint = (change: object) => JSON.stringify({ ...exampleGateRecords, prints: [{ ...exampleGateRecords.prints[0], ...change }] });
  test.each<[string, string, RegExp, ...string[]]>([
    ["nothing", "", /the input is empty/],
    ["no JSON", "{", /the input is not JSON/],
    ["a list", "[]", /the document: .*object/],
    ["no part", JSON.stringify({ ...exampleGateRecords, part: undefined }), /part: is missing$/],
    ["no callouts", JSON.stringify({ ...exampleGateRecords, callouts: undefined }), /callouts: is missing$/],
    ["an unknown key", JSON.stringify({ ...exampleGateRecords, verdict: "go" }), /verdict: is not a key of the records$/],
    ["an unknown key deep inside", withPrint({ colour: "red" }), /prints\[0\]\.colour: is not a key of the records$/],
    ["a wrong type", withPrint({ whole: "yes" }), /prints\[0\]\.whole: .*boolean/],
    ["a hash that is none", withPrint({ modelSha256: "abc" }), /prints\[0\]\.modelSha256: must be 64 lower-case hex digits$/],
    ["an id twice", withPrint({ id: "photo-1" }), /prints: the id "photo-1" stands twice$/],
    ["half a character", withPrint({ name: "4.1\ud800" }), /name holds half a character/],
    ["an unknown option", "", /unknown option "--help"/, "--help"],
  ])("%s", (_, input, message, ...args) => {
    const { status, stdout, stderr } = gate(input, ...args);
    expect(stdout).toBe("");
    expect(stderr).toMatch(/^gate: [^\n]+\n$/);
    expect(stderr.trimEnd()).toMatch(message);
    expect(stderr).not.toMatch(/\s+at .*:\d+/);
    expect(status).toBe(2);
  });
});
