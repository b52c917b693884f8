import { fileURLToPath } from "node:url";
import { ESLint } from "eslint";
import { describe, expect, test } from "vitest";
import { reasonAgainst } from "#scripts/import-directions.mjs";

const root = fileURLToPath(new URL("../../..", import.meta.url));

describe("imports go down only", () => {
  test.each([
    ["app/components/gate-marks.tsx", "#app/data/parts.server.ts", "the server's"],
    ["app/components/gate-marks.tsx", "../services/mail.server.ts", "the server's"],
    ["app/components/viewer/view.tsx", "node:fs", "drawn in browsers"],
    ["app/components/viewer/view.tsx", "#app/kernel/protocol.ts", "not kernel"],
    ["app/components/gate-marks.tsx", "#app/env.server.ts", "environment"],
    ["app/domain/gate.ts", "node:crypto", "pure"],
    ["app/domain/gate.ts", "react", "pure"],
    ["app/engineering/joint.ts", "knex", "pure"],
    ["app/geometry/stl.ts", "../data/parts.server.ts", "not data"],
    ["app/units.ts", "#app/domain/gate.ts", "nothing of ours"],
    ["app/data/parts.server.ts", "#app/services/parts.server.ts", "not services"],
    ["app/http/guards.server.ts", "#app/components/frame.tsx", "not components"],
    ["app/services/files.server.ts", "#app/kernel/run.server.ts", "not kernel"],
    ["app/services/files.server.ts", "#app/routes.ts", "not app"],
    ["app/kernel/run.server.ts", "#app/data/files.server.ts", "not data"],
    ["app/routes/part.tsx", "#storage/client.server.ts", "not storage"],
    ["app/routes/part.tsx", "#tests/support/database.ts", "not tests"],
    ["storage/client.server.ts", "#app/data/files.server.ts", "not data"],
  ])("%s may not import %s", (file, source, reason) => {
    expect(reasonAgainst(file, source)).toContain(reason);
  });

  test.each([
    ["app/routes/part.tsx", "#app/data/parts.server.ts"],
    ["app/routes/part.tsx", "./+types/part"],
    ["app/components/gate-marks.tsx", "#app/domain/gate.ts"],
    ["app/components/viewer/view.tsx", "@react-three/fiber"],
    ["app/domain/gate.ts", "../units.ts"],
    ["app/domain/gate.ts", "zod"],
    ["app/geometry/distance.ts", "three/src/math/Vector3.js"],
    ["app/jobs/measure.server.ts", "#app/kernel/run.server.ts"],
    ["app/data/scope.server.ts", "#db/connection.server.ts"],
    ["storage/client.server.ts", "#app/env.server.ts"],
    ["app/server.ts", "./env.server.ts"],
    ["tests/unit/domain/gate.test.ts", "#app/domain/gate.ts"],
  ])("%s may import %s", (file, source) => {
    expect(reasonAgainst(file, source)).toBeUndefined();
  });
});

describe("the lint configuration reports", () => {
  const eslint = new ESLint({ cwd: root });
  const rulesBroken = async (filePath: string, code: string) => {
    const [result] = await eslint.lintText(code, { filePath: `${root}${filePath}` });
    return result!.messages.map(({ ruleId }) => ruleId);
  };

  test.each([
    ["an import that goes up", "app/components/snippet.tsx", 'import { find } from "#app/data/parts.server.ts";\nfind();\n', "house/import-directions"],
    ["an export that goes up", "app/domain/snippet.ts", 'export { find } from "#app/data/parts.server.ts";\n', "house/import-directions"],
    ["an import at run time", "app/geometry/snippet.ts", 'export const open = () => import("node:fs");\n', "house/import-directions"],
    ["a clock in pure code", "app/domain/snippet.ts", "export const now = () => Date.now();\n", "no-restricted-properties"],
    ["today in pure code", "app/domain/snippet.ts", "export const today = () => new Date();\n", "no-restricted-syntax"],
    ["chance in pure code", "app/engineering/snippet.ts", "export const draw = () => Math.random();\n", "no-restricted-properties"],
    ["a skipped test", "tests/unit/snippet.test.ts", 'import { test } from "vitest";\ntest.skip("x", () => {});\n', "no-restricted-syntax"],
  ])("%s", async (_what, file, code, rule) => {
    expect(await rulesBroken(file, code)).toContain(rule);
  });

  test("nothing about code that keeps to the rules", async () => {
    expect(await rulesBroken("app/domain/snippet.ts", 'import { toMm } from "#app/units.ts";\nexport const half = (at: Date) => [new Date(at), toMm];\n')).toEqual([]);
  });
});
