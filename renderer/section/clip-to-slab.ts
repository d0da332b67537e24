/** A stretch of a line that lies in one band of depth. */
export interface DepthRun {
  /** 0 = inside the slab; 1 to `bands` = outside, farther with each. */
  readonly band: number;
  /** Flat x, y in CSS pixels. */
  readonly points: readonly number[];
}

/** How many steps of fading there are outside the slab. */
export const FADE_BANDS = 4;

/**
 * Cuts a projected line exactly where it enters and leaves the slab and the bands of fading around it; what lies deeper than
 * the last band is left out.
 * @param seen shape [n, 3]: x, y in pixels, depth in millimetres.
 */
export function clipToSlab(seen: ArrayLike<number>, halfSlabMm: number, fadeMm: number): DepthRun[] {
  const edges = Array.from({ length: FADE_BANDS + 1 }, (_, k) => halfSlabMm + (fadeMm * k) / FADE_BANDS);
  const bandOf = (depth: number) => {
    const far = Math.abs(depth);
    const k = edges.findIndex((edge) => far <= edge);
    return k === -1 ? FADE_BANDS + 1 : k;
  };
  const runs: { band: number; points: number[] }[] = [];
  let run: { band: number; points: number[] } | null = null;
  for (let i = 0; i + 5 < seen.length; i += 3) {
    const [x0, y0, d0, x1, y1, d1] = [seen[i]!, seen[i + 1]!, seen[i + 2]!, seen[i + 3]!, seen[i + 4]!, seen[i + 5]!];
    const cuts = [0, ...crossings(d0, d1, edges), 1];
    for (let c = 1; c < cuts.length; c++) {
      const [from, to] = [cuts[c - 1]!, cuts[c]!];
      const band = bandOf(d0 + (d1 - d0) * ((from + to) / 2));
      if (band > FADE_BANDS) {
        run = null;
        continue;
      }
      if (run === null || run.band !== band) {
        run = { band, points: [x0 + (x1 - x0) * from, y0 + (y1 - y0) * from] };
        runs.push(run);
      }
      run.points.push(x0 + (x1 - x0) * to, y0 + (y1 - y0) * to);
    }
  }
  return runs;
}

/** Opacity of a band: full inside, then less with each step. */
export function bandOpacity(band: number): number {
  return band === 0 ? 1 : 0.5 * (1 - (band - 1) / FADE_BANDS);
}

/** Opacity of a single point at a depth, by the same bands but without steps; 0 = too deep to show. */
export function depthOpacity(depthMm: number, halfSlabMm: number, fadeMm: number): number {
  const beyond = Math.abs(depthMm) - halfSlabMm;
  if (beyond <= 1e-9) return 1;
  return beyond >= fadeMm ? 0 : 0.5 * (1 - beyond / fadeMm) + 0.1;
}

function crossings(d0: number, d1: number, edges: readonly number[]): number[] {
  if (d0 === d1) return [];
  const at: number[] = [];
  for (const edge of edges) {
    for (const depth of edge === 0 ? [0] : [edge, -edge]) {
      const t = (depth - d0) / (d1 - d0);
      if (t > 0 && t < 1) at.push(t);
    }
  }
  return at.sort((a, b) => a - b);
}
