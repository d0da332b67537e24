import type { Vec3 } from "#shared/geometry/types.ts";
import { svg } from "#shared/report/svg-plots.ts";
import { niceLength } from "#shared/report/tree-picture.ts";

/** A line with a value at each point. */
export interface ValuedLine {
  /** shape [n], millimetres. */
  readonly line: readonly Vec3[];
  /** shape [n], or empty where there is no value. */
  readonly values: readonly number[];
  /** Drawn dashed: somebody does not have it. */
  readonly isPartial: boolean;
}

/** How lines look from each limit on: the wider and darker, the larger the value. */
const STEPS = [
  { ink: "#9aa6af", width: 1.2 },
  { ink: "#5f7f96", width: 2.2 },
  { ink: "#0b5a8a", width: 3.4 },
  { ink: "#06202f", width: 5 },
] as const;
const PARTIAL_INK = "#a04a00";
const [WIDTH, MOST_HEIGHT] = [330, 330];

/**
 * Lines in space as two still pictures, from the front and turned by 50 degrees, seen slightly from above: the greater the
 * value, the wider and darker; dashed where a line is partial. @param limits three rising limits between the four looks.
 */
export function spreadPictures(label: string, lines: readonly ValuedLine[], limits: readonly [number, number, number]): string[] {
  return [0, 50].map((degrees) =>
    onePicture(`${label}, ${degrees === 0 ? "from the front" : "turned by 50 degrees"}`, lines, limits, degrees),
  );
}

/** What the looks stand for, as one drawing. @param unit of the limits */
export function spreadLegend(limits: readonly [number, number, number], unit: string, partial: string): string {
  const words = [
    `below ${limits[0]} ${unit}`,
    `to ${limits[1]} ${unit}`,
    `to ${limits[2]} ${unit}`,
    `${limits[2]} ${unit} and more`,
  ];
  const keys = STEPS.map(
    ({ ink, width }, k) =>
      `<line x1="${10 + k * 160}" x2="${38 + k * 160}" y1="10" y2="10" stroke="${ink}" stroke-width="${width}"/><text x="${43 + k * 160}" y="14">${words[k]}</text>`,
  );
  const dashed = `<line x1="10" x2="38" y1="28" y2="28" stroke="${PARTIAL_INK}" stroke-width="2" stroke-dasharray="5 3"/><text x="43" y="32">${partial}</text>`;
  return svg("Legend of the pictures", 680, 38, keys.join("") + dashed);
}

function onePicture(label: string, lines: readonly ValuedLine[], limits: readonly number[], degrees: number): string {
  const [turn, tilt] = [(degrees * Math.PI) / 180, 0.26];
  const project = ([x, y, z]: Vec3) => {
    const [across, deep] = [x * Math.cos(turn) - y * Math.sin(turn), x * Math.sin(turn) + y * Math.cos(turn)];
    return { u: across, v: z * Math.cos(tilt) + deep * Math.sin(tilt), depth: deep * Math.cos(tilt) - z * Math.sin(tilt) };
  };
  const all = lines.flatMap(({ line }) => line.map(project));
  if (all.length === 0) return svg(label, WIDTH, 40, `<text x="10" y="24">No strand.</text>`);
  const low = (key: "u" | "v") => Math.min(...all.map((p) => p[key]));
  const high = (key: "u" | "v") => Math.max(...all.map((p) => p[key]));
  const [u0, u1, v0, v1] = [low("u"), high("u"), low("v"), high("v")];
  const scale = Math.min((WIDTH - 24) / Math.max(u1 - u0, 1e-6), (MOST_HEIGHT - 48) / Math.max(v1 - v0, 1e-6));
  const shift = (WIDTH - (u1 - u0) * scale) / 2;
  const place = (p: { u: number; v: number }) =>
    `${(shift + (p.u - u0) * scale).toFixed(1)},${(10 + (v1 - p.v) * scale).toFixed(1)}`;
  // Far strands first, so that near ones cross over them.
  const drawn = [...lines]
    .map((one) => ({ ...one, seen: one.line.map(project) }))
    .sort((a, b) => meanDepth(b.seen) - meanDepth(a.seen))
    .map(({ seen, values, isPartial }) => {
      const stretches = values.length === 0 ? [] : stretchesOf(values, limits);
      const solid = stretches.map(({ from, to, look }) =>
        polyline(seen.slice(from, to + 1).map(place), STEPS[look]!.ink, STEPS[look]!.width),
      );
      const dashed = isPartial ? [polyline(seen.map(place), PARTIAL_INK, 2, "5 3")] : [];
      return [...solid, ...dashed].join("");
    });
  const bar = niceLength(Math.max(u1 - u0, v1 - v0, 1e-3) / 3);
  const height = Math.ceil((v1 - v0) * scale) + 44;
  const y = height - 8;
  const scaleBar = `<line x1="12" x2="${(12 + bar * scale).toFixed(1)}" y1="${y}" y2="${y}" stroke="#1c2126" stroke-width="2"/><text x="12" y="${y - 5}">${bar} mm</text>`;
  return svg(label, WIDTH, height, drawn.join("\n") + scaleBar);
}

function polyline(points: readonly string[], ink: string, width: number, dash = ""): string {
  return `<polyline points="${points.join(" ")}" fill="none" stroke="${ink}" stroke-width="${width}" stroke-linejoin="round"${dash && ` stroke-dasharray="${dash}"`}/>`;
}

function meanDepth(points: readonly { depth: number }[]): number {
  return points.reduce((sum, { depth }) => sum + depth, 0) / points.length;
}

/** Runs of neighbouring points of one look; each run takes the first point of the next, so that no gap shows. */
function stretchesOf(values: readonly number[], limits: readonly number[]) {
  const looks = values.map((value) => limits.filter((limit) => value >= limit).length);
  const out: { from: number; to: number; look: number }[] = [];
  looks.forEach((look, k) => {
    const last = out.at(-1);
    if (last?.look === look) last.to = k;
    else {
      if (last) last.to = k;
      out.push({ from: k, to: k, look });
    }
  });
  return out;
}
