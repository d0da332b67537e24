import preact from "@preact/preset-vite";
import { defineConfig } from "vitest/config";

/** Plain closing line in the form that any log reader understands. */
const closingLine = {
  onTestRunEnd(modules: ReadonlyArray<{ children: { allTests(): Iterable<{ result(): { state: string } }> } }>) {
    const count = { passed: 0, failed: 0, skipped: 0, pending: 0 } as Record<string, number>;
    for (const module of modules)
      for (const test of module.children.allTests()) count[test.result().state] = (count[test.result().state] ?? 0) + 1;
    console.log(`\n${count.passed} passed, ${count.failed} failed, ${count.skipped} skipped`);
  },
};

export default defineConfig({
  plugins: [preact({ prefreshEnabled: false, devToolsEnabled: false })],
  test: {
    reporters: ["default", closingLine],
    maxWorkers: 2,
    projects: [
      {
        extends: true,
        test: {
          name: "plain",
          include: ["test/{shared,main,tools,contract}/**/*.test.ts"],
          environment: "node",
          testTimeout: 60_000,
        },
      },
      {
        extends: true,
        test: { name: "page", include: ["test/renderer/**/*.test.{ts,tsx}"], environment: "happy-dom", testTimeout: 30_000 },
      },
      {
        extends: true,
        test: {
          name: "browser",
          include: ["test/browser/**/*.test.ts"],
          environment: "node",
          testTimeout: 240_000,
          hookTimeout: 120_000,
          fileParallelism: false,
        },
      },
    ],
  },
});
