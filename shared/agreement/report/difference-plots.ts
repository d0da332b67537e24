import type { ReportBlock } from "#shared/agreement/report/report-data.ts";
import { text } from "#shared/agreement/report/report-text.ts";
import type { ContinuousAgreement, StudyQuantity } from "#shared/agreement/study/continuous.ts";
import { blandAltmanPlot } from "#shared/report/bland-altman-plot.ts";
import { MARK_NAMES } from "#shared/report/plot-marks.ts";

/** Plots of the differences of each two annotators; words where there is nothing to plot. */
export function differencePlots(
  { quantity, unit, blandAltman }: ContinuousAgreement,
  study: StudyQuantity,
  annotators: readonly string[],
): ReportBlock[] {
  const svgs: string[] = [];
  const same: string[] = [];
  for (const one of blandAltman) {
    const [i, j] = [annotators.indexOf(one.a), annotators.indexOf(one.b)];
    const points = study.rows.flatMap((rows, group) =>
      rows.flatMap(({ values }) => {
        const [x, y] = [values[i]!, values[j]!];
        return x === null || y === null ? [] : [{ mean: (x + y) / 2, difference: x - y, group }];
      }),
    );
    if (points.length < 2 || one.bias === null) continue;
    if (points.every(({ difference }) => difference === 0)) {
      same.push(`${one.a} and ${one.b}`);
      continue;
    }
    const level = (value: number, interval: { low: number; high: number } | null) => ({
      value,
      low: interval?.low ?? null,
      high: interval?.high ?? null,
    });
    svgs.push(
      blandAltmanPlot({
        label: `Differences of ${one.a} and ${one.b} in ${quantity} over the mean of the two`,
        heading: `${one.a} \u2212 ${one.b}`,
        unit: unit === "count" ? quantity : unit,
        points,
        bias: level(one.bias, one.biasInterval),
        limits:
          one.lowerLimit === null || one.upperLimit === null
            ? null
            : [level(one.lowerLimit, one.lowerLimitInterval), level(one.upperLimit, one.upperLimitInterval)],
      }),
    );
  }
  const blocks: ReportBlock[] = [];
  if (same.length > 0)
    blocks.push(text(`In ${quantity} there is no difference at all between ${same.join(", ")}: nothing to plot.`));
  if (svgs.length > 0) {
    const shapes = study.specimens.slice(0, MARK_NAMES.length).map((name, k) => `${MARK_NAMES[k]} ${name}`);
    const again = study.specimens.length > MARK_NAMES.length ? ", then the shapes come again" : "";
    blocks.push({
      kind: "figure",
      svgs,
      caption: `Bland-Altman plots of ${quantity}. Solid line: bias; dashed: limits of agreement; grey bands: their 95 % intervals, where they can be given. Marks: ${shapes.join(", ")}${again}.`,
    });
  }
  return blocks;
}
