import { escapeHtml } from "#shared/report/html-page.ts";
import { roundTicks, tickText } from "#shared/report/plot-marks.ts";

/** Where a plot's values stand in its drawing, and its axes as SVG. Drawing units. */
export interface ScatterFrame {
  readonly x: (value: number) => number;
  readonly y: (value: number) => number;
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
  readonly axes: string;
}

/** Width of a plot: two of them stand beside each other on an A4 page. */
export const PLOT_WIDTH = 330;
/** Height of a plot. */
export const PLOT_HEIGHT = 236;

/**
 * Frame, ticks and names of a plot. @param rangeX, rangeY lowest and highest value; a range without extent is widened.
 * @param right free space to the right for words.
 */
export function scatterFrame(
  rangeX: readonly [number, number],
  rangeY: readonly [number, number],
  axisX: string,
  axisY: string,
  right = 12,
): ScatterFrame {
  const [left, top, bottom] = [52, 22, 40];
  const [x0, x1] = widened(rangeX);
  const [y0, y1] = widened(rangeY);
  const [width, height] = [PLOT_WIDTH - left - right, PLOT_HEIGHT - top - bottom];
  const x = (value: number) => r(left + ((value - x0) / (x1 - x0)) * width);
  const y = (value: number) => r(top + height - ((value - y0) / (y1 - y0)) * height);
  const edge = PLOT_HEIGHT - bottom;
  const ticksX = roundTicks(x0, x1, 5).map(
    (t) =>
      `<line x1="${x(t)}" x2="${x(t)}" y1="${edge}" y2="${edge + 4}" stroke="#57616b"/><text x="${x(t)}" y="${edge + 16}" text-anchor="middle">${tickText(t)}</text>`,
  );
  const ticksY = roundTicks(y0, y1, 5).map(
    (t) =>
      `<line x1="${left - 4}" x2="${left}" y1="${y(t)}" y2="${y(t)}" stroke="#57616b"/><text x="${left - 7}" y="${r(y(t) + 4)}" text-anchor="end">${tickText(t)}</text>`,
  );
  const names = `<text x="${r(left + width / 2)}" y="${PLOT_HEIGHT - 6}" text-anchor="middle">${escapeHtml(axisX)}</text><text transform="translate(12 ${r(top + height / 2)}) rotate(-90)" text-anchor="middle">${escapeHtml(axisY)}</text>`;
  const box = `<path d="M${left} ${top}V${edge}H${PLOT_WIDTH - right}" fill="none" stroke="#57616b"/>`;
  return {
    x,
    y,
    left,
    right: PLOT_WIDTH - right,
    top,
    bottom: edge,
    axes: `${ticksX.join("")}${ticksY.join("")}${box}${names}`,
  };
}

/** A range with a little air at both ends. */
function widened([low, high]: readonly [number, number]): [number, number] {
  const span = high - low;
  if (span > 0) return [low - 0.06 * span, high + 0.06 * span];
  const half = Math.max(Math.abs(low) * 0.1, 0.5);
  return [low - half, high + half];
}

function r(value: number): number {
  return Math.round(value * 100) / 100;
}
