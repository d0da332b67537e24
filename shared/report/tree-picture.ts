import type { Vec3 } from "#shared/geometry/types.ts";
import { svg } from "#shared/report/svg-plots.ts";
import { type PlainTree, placeOf } from "#shared/trees/plain-trees.ts";
import { rootedStrands } from "#shared/trees/rooted-strands.ts";

/**
 * Two trees in two projections side by side (front: x to the right, z up; side: y to the right): the reference as a broad
 * pale band, the other as a thin dark dashed line, origins as squares. Scale bar in millimetres.
 */
export function treePairPicture(label: string, reference: PlainTree, other: PlainTree | undefined): string {
  const linesOf = (tree: PlainTree | undefined) => (tree ? rootedStrands(tree).map((strand) => strand.line) : []);
  const [first, second] = [linesOf(reference), linesOf(other)];
  const all = [...first, ...second].flat();
  if (all.length === 0) return svg(label, 420, 60, `<text x="10" y="30">no centreline</text>`);
  const low = [0, 1, 2].map((axis) => Math.min(...all.map((p) => p[axis as 0]!)));
  const high = [0, 1, 2].map((axis) => Math.max(...all.map((p) => p[axis as 0]!)));
  const span = Math.max(...low.map((value, axis) => high[axis]! - value), 1e-3);
  const scale = 180 / span;
  const panel = (axis: 0 | 1, shift: number) => {
    const place = (p: Vec3) =>
      `${(shift + 10 + (p[axis] - low[axis]! + (span - (high[axis]! - low[axis]!)) / 2) * scale).toFixed(1)},${(10 + (high[2]! - p[2]) * scale).toFixed(1)}`;
    const draw = (lines: readonly (readonly Vec3[])[], style: string) =>
      lines.map((line) => `<polyline points="${line.map(place).join(" ")}" fill="none" ${style}/>`).join("");
    const mark = (tree: PlainTree | undefined, style: string) => {
      const root = tree?.nodes.find((node) => node.id === tree.root);
      if (!root) return "";
      const [x, y] = place(placeOf(root)).split(",").map(Number) as [number, number];
      return `<rect x="${x - 4}" y="${y - 4}" width="8" height="8" ${style}/>`;
    };
    return `${draw(first, 'stroke="#9fc4da" stroke-width="7" stroke-linecap="round"')}${draw(second, 'stroke="#7a2e00" stroke-width="2" stroke-dasharray="6 3"')}${mark(reference, 'fill="#9fc4da" stroke="#1c2126"')}${mark(other, 'fill="none" stroke="#7a2e00" stroke-width="2"')}<text x="${shift + 10}" y="222">${axis === 0 ? "front" : "side"}</text>`;
  };
  const bar = niceLength(span / 3);
  const scaleBar = `<line x1="330" x2="${(330 + bar * scale).toFixed(1)}" y1="216" y2="216" stroke="#1c2126" stroke-width="2"/><text x="330" y="210">${bar} mm</text>`;
  return svg(label, 420, 230, panel(0, 0) + panel(1, 210) + scaleBar);
}

/** The greatest of 1, 2 and 5 times a power of ten that is not above `length`. @param length above 0 */
export function niceLength(length: number): number {
  const power = 10 ** Math.floor(Math.log10(length));
  const step = [5, 2, 1].find((factor) => factor * power <= length) ?? 1;
  return Math.round(step * power * 1e6) / 1e6;
}
