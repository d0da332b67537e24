import { offerDownload } from "#renderer/app/offer-download.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import type { Comparison } from "#shared/compare/comparison.ts";
import { comparisonReport } from "#shared/compare/comparison-report.ts";

export type ComparisonFormat = "json" | "html";

/** Time for repeating the result at other merge tolerances, milliseconds. */
const MERGES_BUDGET_MS = 20_000;

/** A plain file name for a comparison. */
export function comparisonFileName(model: SideBySideModel, format: ComparisonFormat): string {
  const name = `${model.specimen.value.name}-${model.b.label}-against-${model.a.label}.comparison`;
  return `${name.replace(/[^\p{L}\p{N}._-]+/gu, "-")}.${format}`;
}

/** The comparison as the command line's `compare --json` writes it. */
export function comparisonJson(comparison: Comparison): string {
  return `${JSON.stringify(comparison)}\n`;
}

/** Gives the comparison on screen to the browser's downloads. @returns the file's name */
export async function exportComparison(
  model: SideBySideModel,
  comparison: Comparison,
  format: ComparisonFormat,
): Promise<string> {
  const name = comparisonFileName(model, format);
  if (format === "json") offerDownload(comparisonJson(comparison), name, "application/json");
  else offerDownload(await reportOf(model, comparison), name, "text/html");
  return name;
}

async function reportOf(model: SideBySideModel, comparison: Comparison): Promise<string> {
  const options = model.compareOptions();
  const merges = [0, options.merge / 2, options.merge, 2 * options.merge].filter((mm, k, all) => all.indexOf(mm) === k);
  const [hello, atMerges] = await Promise.all([
    model.services.client.hello(),
    model.run.atMerges({ a: model.a.plain, b: model.b.plain, options, merges, budgetMs: MERGES_BUDGET_MS }),
  ]);
  const specimen = model.specimen.value;
  return comparisonReport({
    specimen: specimen.name,
    synthetic: specimen.synthetic,
    nameA: model.a.label,
    nameB: model.b.label,
    a: model.a.plain,
    b: model.b.plain,
    comparison,
    toleranceMm: options.tolerance,
    atMerges,
    software: `Tautline ${hello.version}`,
  });
}
