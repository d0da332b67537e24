import { readFile } from "node:fs/promises";
import { createRequire } from "node:module";
import type { Page } from "playwright-core";

interface AxeResult {
  readonly violations: readonly {
    readonly id: string;
    readonly impact: string;
    readonly nodes: readonly { readonly html: string }[];
  }[];
}

/** Violations of WCAG 2 A and AA that axe calls serious or critical, one line each. Source: axe-core's own rules. */
export async function seriousViolations(page: Page): Promise<string[]> {
  const axe = await readFile(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");
  await page.evaluate(axe);
  const result = await page.evaluate(async () => {
    const { axe: loaded } = window as unknown as { axe: { run(options: unknown): Promise<AxeResult> } };
    return loaded.run({ runOnly: ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"] });
  });
  return result.violations
    .filter(({ impact }) => impact === "serious" || impact === "critical")
    .flatMap(({ id, nodes }) => nodes.map(({ html }) => `${id}: ${html.slice(0, 160)}`));
}
