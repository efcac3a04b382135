import { defineConfig } from "vitest/config";

export default defineConfig({
  test: {
    include: ["tests/**/*.test.ts"],
    testTimeout: 20_000,
    // Two cores: more workers only slow the solver tests down.
    maxWorkers: 2,
    reporters: ["./tests/reporter.ts"],
  },
});
