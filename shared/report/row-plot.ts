import { escapeHtml } from "#shared/report/html-page.ts";
import { plotMark, roundTicks, tickText } from "#shared/report/plot-marks.ts";
import { svg } from "#shared/report/svg-plots.ts";

/** A row of marks on one common scale. */
export interface PlotRow {
  readonly name: string;
  readonly marks: readonly { readonly value: number; readonly shape: number; readonly isFilled: boolean }[];
}

/** Values of each row as marks over one axis, as SVG. @param legend what each shape stands for, in order of the shapes. */
export function rowPlot(label: string, rows: readonly PlotRow[], axis: string, legend: readonly string[]): string {
  const values = rows.flatMap(({ marks }) => marks.map(({ value }) => value));
  const [low, high] = [Math.min(...values, 0), Math.max(...values, 1e-9)];
  const [left, right, rowHeight, top] = [92, 660, 30, 30];
  const x = (value: number) => left + ((value - low) / (high - low)) * (right - left - 12);
  const bottom = top + rows.length * rowHeight;
  const ticks = roundTicks(low, high, 6).map(
    (t) =>
      `<line x1="${x(t).toFixed(1)}" x2="${x(t).toFixed(1)}" y1="${top - 4}" y2="${bottom}" stroke="#dde2e6"/><text x="${x(t).toFixed(1)}" y="${bottom + 15}" text-anchor="middle">${tickText(t)}</text>`,
  );
  // Each shape has a height of its own within the row, so that equal values do not hide each other.
  const apart = Math.min(6, 16 / Math.max(1, legend.length));
  const height = (shape: number) => (shape - (legend.length - 1) / 2) * apart;
  const drawn = rows.map(({ name, marks }, k) => {
    const y = top + (k + 0.5) * rowHeight;
    const all = marks.map(({ value, shape, isFilled }) => plotMark(shape, x(value), y + height(shape), 3.8, "#0b5a8a", isFilled));
    return `<line x1="${left}" x2="${right}" y1="${y}" y2="${y}" stroke="#eef1f3"/><text x="${left - 8}" y="${y + 4}" text-anchor="end">${escapeHtml(name)}</text>${all.join("")}`;
  });
  const key = legend.map(
    (text, k) =>
      `${plotMark(k, left + 8 + k * 120, 12, 4.2, "#0b5a8a", true)}<text x="${left + 18 + k * 120}" y="16">${escapeHtml(text)}</text>`,
  );
  const name = `<text x="${(left + right) / 2}" y="${bottom + 32}" text-anchor="middle">${escapeHtml(axis)}</text>`;
  return svg(label, 680, bottom + 40, `${ticks.join("")}${drawn.join("")}${key.join("")}${name}`);
}
