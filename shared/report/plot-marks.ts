/** Shapes of marks, in order; told apart without colour. */
export const MARK_NAMES = ["circle", "square", "triangle", "diamond", "cross", "plus"] as const;

/**
 * A mark as SVG. @param kind 0 = circle, 1 = square, 2 = triangle, 3 = diamond, 4 = cross, 5 = plus, then again from 0.
 * @param isFilled hollow marks have a white inside; crosses and pluses are lines either way.
 */
export function plotMark(kind: number, x: number, y: number, size: number, ink: string, isFilled: boolean): string {
  const [cx, cy, r] = [round(x), round(y), round(size)];
  const paint = `fill="${isFilled ? ink : "#ffffff"}" stroke="${ink}" stroke-width="1.2"`;
  const lines = `fill="none" stroke="${ink}" stroke-width="1.6"`;
  switch (kind % MARK_NAMES.length) {
    case 0:
      return `<circle cx="${cx}" cy="${cy}" r="${r}" ${paint}/>`;
    case 1:
      return `<rect x="${round(x - 0.9 * r)}" y="${round(y - 0.9 * r)}" width="${round(1.8 * r)}" height="${round(1.8 * r)}" ${paint}/>`;
    case 2:
      return `<path d="M${cx} ${round(y - 1.15 * r)}L${round(x + 1.1 * r)} ${round(y + 0.85 * r)}H${round(x - 1.1 * r)}Z" ${paint}/>`;
    case 3:
      return `<path d="M${cx} ${round(y - 1.25 * r)}L${round(x + 1.25 * r)} ${cy}L${cx} ${round(y + 1.25 * r)}L${round(x - 1.25 * r)} ${cy}Z" ${paint}/>`;
    case 4:
      return `<path d="M${round(x - r)} ${round(y - r)}l${round(2 * r)} ${round(2 * r)}m0 ${round(-2 * r)}l${round(-2 * r)} ${round(2 * r)}" ${lines}/>`;
    default:
      return `<path d="M${round(x - 1.2 * r)} ${cy}h${round(2.4 * r)}M${cx} ${round(y - 1.2 * r)}v${round(2.4 * r)}" ${lines}/>`;
  }
}

/** Five numbers or so that divide a range evenly at round places, ends inside the range. @param most about how many */
export function roundTicks(low: number, high: number, most = 5): number[] {
  const span = high - low;
  if (!(span > 0)) return [low];
  const rough = span / most;
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((factor) => factor * power).find((one) => one >= rough - 1e-12)!;
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  return Array.from({ length: last - first + 1 }, (_, k) => Number(((first + k) * step).toPrecision(12)));
}

/** A number on an axis, with a true minus sign. */
export function tickText(value: number): string {
  const text = Number(value.toPrecision(6)).toString();
  return text.startsWith("-") ? `\u2212${text.slice(1)}` : text;
}

function round(value: number): number {
  return Math.round(value * 100) / 100;
}
