import { defineConfig } from "vitest/config";

export default defineConfig({
  test: {
    include: ["tests/**/*.test.ts"],
    // Machines are shared: a test that takes a second alone may take a minute beside a solver.
    testTimeout: 120_000,
    hookTimeout: 120_000,
    // Two cores: more workers only slow the solver tests down.
    maxWorkers: 2,
    reporters: ["./tests/reporter.ts"],
  },
});
