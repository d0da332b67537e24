import { escapeHtml } from "#shared/report/html-page.ts";
import { plotMark, tickText } from "#shared/report/plot-marks.ts";
import { PLOT_HEIGHT, PLOT_WIDTH, scatterFrame } from "#shared/report/scatter-frame.ts";
import { svg } from "#shared/report/svg-plots.ts";

/** A level with its interval; null where there is none. */
export interface PlotLevel {
  readonly value: number;
  readonly low: number | null;
  readonly high: number | null;
}

export interface DifferencePlot {
  /** What the drawing shows, for readers who do not see it. */
  readonly label: string;
  /** Short heading inside the drawing. */
  readonly heading: string;
  readonly unit: string;
  /** Means and differences; `group` chooses the mark's shape. */
  readonly points: readonly { readonly mean: number; readonly difference: number; readonly group: number }[];
  readonly bias: PlotLevel;
  /** Lower and upper limits of agreement; null where there are none. */
  readonly limits: readonly [PlotLevel, PlotLevel] | null;
}

const INK = "#0b5a8a";

/**
 * Differences over means as SVG: bias as a solid line, limits of agreement as dashed ones, their intervals as grey bands; one
 * shape of mark for each group.
 */
export function blandAltmanPlot({ label, heading, unit, points, bias, limits }: DifferencePlot): string {
  const levels = [bias, ...(limits ?? [])];
  const heights = [
    0,
    ...points.map(({ difference }) => difference),
    ...levels.flatMap(({ value, low, high }) => [value, low ?? value, high ?? value]),
  ];
  const means = points.map(({ mean }) => mean);
  const frame = scatterFrame(
    [Math.min(...means), Math.max(...means)],
    [Math.min(...heights), Math.max(...heights)],
    `mean of the two (${unit})`,
    `difference (${unit})`,
    56,
  );
  const bands = levels.flatMap(({ low, high }) =>
    low === null || high === null
      ? []
      : [
          `<rect x="${frame.left}" width="${frame.right - frame.left}" y="${frame.y(high)}" height="${Math.max(0, frame.y(low) - frame.y(high)).toFixed(2)}" fill="#1c2126" fill-opacity="0.1"/>`,
        ],
  );
  const zero = `<line x1="${frame.left}" x2="${frame.right}" y1="${frame.y(0)}" y2="${frame.y(0)}" stroke="#8b949c" stroke-width="0.8"/>`;
  const lines = levels.map(
    ({ value }, k) =>
      `<line x1="${frame.left}" x2="${frame.right}" y1="${frame.y(value)}" y2="${frame.y(value)}" stroke="#1c2126" stroke-width="1.3"${k > 0 ? ' stroke-dasharray="6 3"' : ""}/>`,
  );
  const words = apart(levels.map(({ value }) => frame.y(value))).map(
    (y, k) =>
      `<text x="${frame.right + 4}" y="${(y + 4).toFixed(1)}">${tickText(Number(levels[k]!.value.toPrecision(3)))}</text>`,
  );
  const size = points.length > 40 ? 2.2 : 3.2;
  const marks = points.map(({ mean, difference, group }) =>
    plotMark(group, frame.x(mean), frame.y(difference), size, INK, false),
  );
  const title = `<text x="${frame.left}" y="13" font-weight="600">${escapeHtml(heading)}</text>`;
  return svg(
    label,
    PLOT_WIDTH,
    PLOT_HEIGHT,
    `${bands.join("")}${zero}${frame.axes}${marks.join("")}${lines.join("")}${words.join("")}${title}`,
  );
}

/** Heights moved apart to at least 13 units, in their order. */
function apart(heights: readonly number[]): number[] {
  const order = heights.map((_, k) => k).sort((a, b) => heights[a]! - heights[b]!);
  const out = [...heights];
  order.forEach((k, n) => {
    if (n > 0) out[k] = Math.max(out[k]!, out[order[n - 1]!]! + 13);
  });
  return out;
}
