import { defineConfig } from "vitest/config";

// Pure suites need nothing; the integration suites need the throw-away cluster
// and fakes that scripts/test.mjs starts.
export default defineConfig({
  test: {
    projects: [
      { test: { name: "pure", include: ["tests/unit/**/*.test.ts", "tests/standards/**/*.test.ts"], testTimeout: 30_000 } },
      {
        test: {
          name: "integration",
          include: ["tests/integration/**/*.test.ts", "tests/faults/**/*.test.ts"],
          globalSetup: ["tests/support/global-setup.ts"],
          testTimeout: 60_000,
          hookTimeout: 120_000,
          fileParallelism: false,
          pool: "forks",
        },
      },
    ],
  },
});
