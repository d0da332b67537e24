import type { SolvedCurve } from "#shared/api/engine.ts";
import type { StrandRequest, TracedCurve } from "#shared/tracing/strand-request.ts";

/** Asks the engine for canonical curves, one per strand in that order. */
export type AskSolve = (strands: readonly StrandRequest[], signal: AbortSignal) => Promise<readonly SolvedCurve[]>;

/** So many curves are remembered: enough for taking pins back and forth without asking again. */
const REMEMBERED = 400;

/**
 * Canonical curves for strands. A curve depends on its request alone, so what was solved once in this session is remembered.
 */
export class StrandSolver {
  private readonly known = new Map<string, TracedCurve>();

  constructor(private readonly ask: AskSolve) {}

  async solve(strands: readonly StrandRequest[], signal: AbortSignal): Promise<TracedCurve[]> {
    const keys = strands.map((strand) => JSON.stringify([strand.from, strand.via, strand.to, strand.legs ?? null]));
    const missing = strands.filter((_, i) => !this.known.has(keys[i]!));
    if (missing.length > 0) {
      const answer = await this.ask(missing, signal);
      let next = 0;
      const fresh = new Map<string, TracedCurve>();
      strands.forEach((_, i) => {
        if (!this.known.has(keys[i]!) && !fresh.has(keys[i]!)) fresh.set(keys[i]!, tracedOf(answer[next]!));
        if (!this.known.has(keys[i]!)) next += 1;
      });
      for (const [key, curve] of fresh) this.known.set(key, curve);
    }
    const curves = keys.map((key) => this.known.get(key)!);
    while (this.known.size > REMEMBERED) this.known.delete(this.known.keys().next().value!);
    return curves;
  }
}

/** A curve as it came in JSON: null radius = below resolution. */
export function tracedOf(solved: SolvedCurve): TracedCurve {
  return {
    points: Float64Array.from(solved.points),
    radii: Float64Array.from(solved.radii, (radius) => radius ?? Number.NaN),
    madeBy: solved.madeBy,
    imageFit: solved.imageFit,
    followed: solved.followed,
  };
}
