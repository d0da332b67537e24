import type { SectionRequest } from "#shared/api/engine.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, norm, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { BrickPyramid } from "#shared/volume/bricks.ts";
import { fetchSection } from "#shared/volume/section.ts";

/** Steps in the direction of scrolling whose bricks are fetched ahead. */
const STEPS_AHEAD = 8;

type Seen = Pick<SectionRequest, "plane" | "slabMm" | "quality">;

/**
 * Guesses the next planes: when two sections of a window followed each other along their normal, the person steps through
 * the scan, and the bricks of the planes ahead are fetched while nothing else is asked for.
 */
export class PlanesAhead {
  #last: { readonly key: string; readonly request: Seen } | null = null;
  #step: Vec3 | null = null;
  #ahead: { readonly bricks: BrickPyramid; readonly request: Seen; readonly step: Vec3; next: number } | null = null;

  /** True while bricks can be fetched. */
  get busy(): boolean {
    return this.#ahead !== null;
  }

  /** Remembers a section that was shown. */
  shown(bricks: BrickPyramid, store: number, request: SectionRequest): void {
    const key = `${store} ${request.ticket.window}`;
    const last = this.#last;
    this.#last = { key, request };
    // The same plane again, sharper, comes after a step: its direction still counts.
    const step = last?.key === key ? stepAlongNormal(last.request.plane, request.plane) : null;
    if (step === null || norm(step) > 0) this.#step = step;
    this.#ahead = this.#step ? { bricks, request, step: this.#step, next: 1 } : null;
  }

  /** Fetches one plane's bricks, or as many of them as there is time for. */
  fetch(signal: { readonly aborted: boolean }): void {
    const ahead = this.#ahead;
    if (!ahead) return;
    const { request, step } = ahead;
    const origin = add(request.plane.origin, scale(step, ahead.next)) as Vec3 as Seen["plane"]["origin"];
    // Whatever happens here happens again, and is reported, when the plane itself is asked for.
    this.#ahead = null;
    fetchSection(ahead.bricks, { ...request, plane: { ...request.plane, origin } }, signal);
    if (ahead.next < STEPS_AHEAD && !signal.aborted) this.#ahead = { ...ahead, next: ahead.next + 1 };
  }

  forget(): void {
    this.#last = null;
    this.#step = null;
    this.#ahead = null;
  }
}

/** The step between two planes of the same outline that lie one behind the other (0 for the same place); null when they do not. */
function stepAlongNormal(a: Seen["plane"], b: Seen["plane"]): Vec3 | null {
  const same = (p: Vec3, q: Vec3) => norm(subtract(p, q)) <= 1e-9 + 1e-6 * norm(p);
  if (!same(scale(a.u, a.width), scale(b.u, b.width)) || !same(scale(a.v, a.height), scale(b.v, b.height))) return null;
  if (same(a.origin, b.origin)) return [0, 0, 0];
  const step = subtract(b.origin, a.origin);
  return Math.abs(dot(step, normalise(cross(b.u, b.v)))) >= 0.99 * norm(step) ? step : null;
}
