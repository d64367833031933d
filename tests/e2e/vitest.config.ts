import { defineConfig } from "vitest/config";

export default defineConfig({
  test: {
    root: new URL("../..", import.meta.url).pathname,
    include: ["tests/e2e/**/*.test.ts"],
    maxWorkers: 1,
    fileParallelism: false,
    testTimeout: 90_000,
    hookTimeout: 120_000,
  },
});
