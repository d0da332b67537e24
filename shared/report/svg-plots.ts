import { escapeHtml } from "#shared/report/html-page.ts";

/** One line of a plot; gaps where a value is null. */
export interface PlotLine {
  readonly name: string;
  readonly values: readonly (number | null)[];
  /** Quiet lines are context, drawn thin and grey. */
  readonly quiet?: boolean;
}

// Lines differ by dash, mark and shade, so that they can be told apart in greyscale and by colour-blind readers.
const DASHES = ["", "7 3", "2 3", "9 3 2 3", "5 2 5 6", "1 2"];
const INKS = ["#0b5a8a", "#a04a00", "#3d6b1f", "#6d3a86", "#8a1c3b", "#30474f"];
const [WIDTH, HEIGHT, LEFT, RIGHT, TOP, BOTTOM] = [640, 320, 56, 180, 16, 46];

/** A line chart as SVG. `x` are the places of the values; both axes start and end at the given numbers. */
export function lineChart(
  label: string,
  x: readonly number[],
  lines: readonly PlotLine[],
  axisX: string,
  axisY: string,
  rangeY: readonly [number, number],
): string {
  const [x0, x1] = [x[0]!, x[x.length - 1]!];
  const px = (value: number) => LEFT + ((value - x0) / (x1 - x0)) * (WIDTH - LEFT - RIGHT);
  const py = (value: number) => HEIGHT - BOTTOM - ((value - rangeY[0]) / (rangeY[1] - rangeY[0])) * (HEIGHT - TOP - BOTTOM);
  const ticksY = Array.from({ length: 6 }, (_, k) => rangeY[0] + ((rangeY[1] - rangeY[0]) * k) / 5);
  const grid = ticksY.map(
    (t) =>
      `<line x1="${LEFT}" x2="${WIDTH - RIGHT}" y1="${r(py(t))}" y2="${r(py(t))}" stroke="#dde2e6"/><text x="${LEFT - 8}" y="${r(py(t) + 4)}" text-anchor="end">${short(t)}</text>`,
  );
  const ticksX = x.map(
    (t) =>
      `<line x1="${r(px(t))}" x2="${r(px(t))}" y1="${HEIGHT - BOTTOM}" y2="${HEIGHT - BOTTOM + 5}" stroke="#57616b"/><text x="${r(px(t))}" y="${HEIGHT - BOTTOM + 19}" text-anchor="middle">${short(t)}</text>`,
  );
  const ends = spread(lines.map((line) => py([...line.values].reverse().find((v) => v !== null) ?? rangeY[0])));
  const drawn = lines.map((line, k) => {
    const ink = line.quiet ? "#6b747c" : INKS[k % INKS.length]!;
    const points = line.values.flatMap((v, i) => (v === null ? [] : [`${r(px(x[i]!))},${r(py(v))}`]));
    const name = `<text x="${WIDTH - RIGHT + 40}" y="${r(ends[k]! + 4)}" fill="${ink}">${escapeHtml(line.name.length > 18 ? `${line.name.slice(0, 17)}…` : line.name)}</text>`;
    const pen = `fill="none" stroke="${ink}" stroke-width="${line.quiet ? 1.25 : 2.25}" stroke-dasharray="${DASHES[k % DASHES.length]}"`;
    const sample = `<line x1="${WIDTH - RIGHT + 10}" x2="${WIDTH - RIGHT + 34}" y1="${r(ends[k]!)}" y2="${r(ends[k]!)}" ${pen}/>`;
    return `<polyline points="${points.join(" ")}" ${pen}/>${sample}${name}`;
  });
  return svg(
    label,
    WIDTH,
    HEIGHT,
    `${grid.join("")}${ticksX.join("")}<line x1="${LEFT}" x2="${WIDTH - RIGHT}" y1="${HEIGHT - BOTTOM}" y2="${HEIGHT - BOTTOM}" stroke="#57616b"/>
${drawn.join("\n")}
<text x="${LEFT + (WIDTH - LEFT - RIGHT) / 2}" y="${HEIGHT - 6}" text-anchor="middle">${escapeHtml(axisX)}</text>
<text transform="translate(14 ${TOP + (HEIGHT - TOP - BOTTOM) / 2}) rotate(-90)" text-anchor="middle">${escapeHtml(axisY)}</text>`,
  );
}

/** Horizontal bars with their counts as SVG. */
export function barChart(label: string, bars: readonly { readonly name: string; readonly value: number }[]): string {
  const most = Math.max(1, ...bars.map((bar) => bar.value));
  const height = 12 + 24 * bars.length;
  const drawn = bars.map((bar, k) => {
    const y = 8 + 24 * k;
    const width = (bar.value / most) * 380;
    return `<text x="150" y="${y + 13}" text-anchor="end">${escapeHtml(bar.name)}</text><rect x="160" y="${y}" width="${r(width)}" height="16" fill="#0b5a8a"/><text x="${r(168 + width)}" y="${y + 13}">${short(bar.value)}</text>`;
  });
  return svg(label, 640, height, drawn.join("\n"));
}

/** An SVG picture with its label for readers who do not see it. */
export function svg(label: string, width: number, height: number, body: string): string {
  return `<svg xmlns="http://www.w3.org/2000/svg" role="img" aria-label="${escapeHtml(label)}" viewBox="0 0 ${width} ${height}" width="${width}" height="${height}" font-family="system-ui, 'DejaVu Sans', sans-serif" font-size="12" fill="#1c2126">
${body}
</svg>`;
}

/** Label heights moved apart to at least 14 units, in the same order. */
function spread(heights: readonly number[]): number[] {
  const order = heights.map((_, k) => k).sort((a, b) => heights[a]! - heights[b]!);
  const out = [...heights];
  order.forEach((k, n) => {
    if (n > 0) out[k] = Math.max(out[k]!, out[order[n - 1]!]! + 14);
  });
  return out;
}

function r(value: number): string {
  return (Math.round(value * 100) / 100).toString();
}

function short(value: number): string {
  return (Math.round(value * 1000) / 1000).toString();
}
