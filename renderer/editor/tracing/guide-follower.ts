import { type ReadonlySignal, signal } from "@preact/signals";
import type { GuidePreviewAnswer } from "#shared/api/engine.ts";
import { isTautlineError } from "#shared/errors.ts";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import { pointMm } from "#shared/geometry/types.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { LegKind } from "#shared/trees/document.ts";

/** The live path from the last pin to the pointer. */
export interface Guide {
  readonly points: readonly Vec3[];
  /** True while the exact path has not arrived and a coarse one, or a straight line, stands for it. */
  readonly coarse: boolean;
  readonly imageFit: number | null;
  /** First and last point index of each stretch that leaves the string. */
  readonly doubtful: readonly (readonly [number, number])[];
}

/** While the pointer rests on a coarse guide the engine is asked again: soon, then less often, then no more. */
const FIRST_AGAIN_MS = 120;
const AGAIN_GROWTH = 1.4;
const LONGEST_AGAIN_MS = 1500;
const MOST_AGAIN = 24;

/** What the follower asks of the engine; null = a newer request took over. */
export interface GuideSource {
  open(from: PointMm, impassable: readonly ImpassableString[]): Promise<{ session: string } | null>;
  preview(session: string, to: PointMm): Promise<GuidePreviewAnswer | null>;
  close(session: string): Promise<unknown>;
}

/**
 * Keeps one guide session at the last pin and previews the way to the pointer. A preview never decides anything: the
 * committed curve is solved anew. Failures of a preview show no guide, and the next movement tries again. A coarse guide
 * does not stay coarse because the pointer rests: it is asked for again until it is fine.
 */
export class GuideFollower {
  private readonly guideSignal = signal<Guide | null>(null);
  private from: PointMm | null = null;
  private to: PointMm | null = null;
  private session: Promise<string | null> | null = null;
  private leg: LegKind = "guide";
  /** Settles when no preview of the session is under way any more. */
  private previews: Promise<unknown> = Promise.resolve();

  /** Previews asked for and not answered yet. */
  private asked = 0;
  private nextAsk: ReturnType<typeof setTimeout> | undefined;

  /** @param impassable strings that a guide from this pin may not enter. */
  constructor(
    private readonly source: GuideSource,
    private readonly impassable: (from: PointMm) => readonly ImpassableString[] = () => [],
  ) {}

  get guide(): ReadonlySignal<Guide | null> {
    return this.guideSignal;
  }

  /** True while a preview is on its way. */
  get isAsking(): boolean {
    return this.asked > 0;
  }

  /** Sets the pin that the guide starts from (null = none), and how the stretch runs. */
  start(from: PointMm | null, leg: LegKind): void {
    const same = from !== null && this.from !== null && samePlace(from, this.from) && leg === this.leg;
    if (same) return;
    const samePin = from !== null && this.from !== null && samePlace(from, this.from);
    clearTimeout(this.nextAsk);
    this.leg = leg;
    this.from = from;
    if (!samePin) this.closeSession();
    this.guideSignal.value = null;
    if (from !== null && leg === "guide" && this.session === null) this.openSession(from);
    if (this.to !== null) void this.point(this.to);
  }

  /** The pointer is at `to`; null = nowhere. */
  point(to: PointMm | null): Promise<void> {
    return this.show(to, 0);
  }

  /** Sets out from the pin anew: what the guide may enter has changed. */
  setOutAnew(): void {
    this.closeSession();
    if (this.to !== null) void this.point(this.to);
  }

  stop(): void {
    this.start(null, "guide");
    this.to = null;
  }

  /** @param times how often this place was asked for before. */
  private async show(to: PointMm | null, times: number): Promise<void> {
    clearTimeout(this.nextAsk);
    this.to = to;
    const from = this.from;
    if (to === null || from === null) {
      this.guideSignal.value = null;
      return;
    }
    if (this.leg === "straight") {
      this.guideSignal.value = { points: [from, to], coarse: false, imageFit: null, doubtful: [] };
      return;
    }
    const answer = await this.ask(from, to);
    if (answer === null || this.from !== from || this.leg !== "guide" || this.to === null) return;
    this.guideSignal.value = {
      points: pointsOf(answer.points),
      coarse: answer.coarse,
      imageFit: answer.imageFit,
      doubtful: answer.doubtful,
    };
    // An answer that comes while the pointer has gone on is followed by a newer one anyway.
    if (answer.coarse && this.to === to && times < MOST_AGAIN) {
      const pause = Math.min(FIRST_AGAIN_MS * AGAIN_GROWTH ** times, LONGEST_AGAIN_MS);
      this.nextAsk = setTimeout(() => void this.show(to, times + 1), pause);
    }
  }

  private async ask(from: PointMm, to: PointMm, again = true): Promise<GuidePreviewAnswer | null> {
    if (this.session === null) this.openSession(from);
    this.asked += 1;
    try {
      const session = await this.session;
      if (session === null || this.from !== from) return null;
      const preview = this.source.preview(session, to);
      this.previews = preview.catch(() => undefined);
      return await preview;
    } catch (error) {
      if (this.from !== from) return null;
      // An idle session is closed by the engine: open it once more.
      this.session = null;
      if (again && isTautlineError(error, "not-found")) return this.ask(from, to, false);
      this.guideSignal.value = null;
      return null;
    } finally {
      this.asked -= 1;
    }
  }

  private openSession(from: PointMm): void {
    const session = this.source.open(from, this.impassable(from)).then((answer) => answer?.session ?? null);
    session.catch(() => undefined);
    this.session = session;
  }

  private closeSession(): void {
    const session = this.session;
    this.session = null;
    if (session === null) return;
    const previews = this.previews;
    // A preview on its way to a closed session would come back as a failure.
    void session.then((id) => previews.then(() => (id === null ? undefined : this.source.close(id)))).catch(() => undefined);
  }
}

function samePlace(a: Vec3, b: Vec3): boolean {
  return a[0] === b[0] && a[1] === b[1] && a[2] === b[2];
}

function pointsOf(flat: readonly number[]): Vec3[] {
  const points: Vec3[] = [];
  for (let i = 0; i + 2 < flat.length; i += 3) points.push(pointMm(flat[i]!, flat[i + 1]!, flat[i + 2]!));
  return points;
}
