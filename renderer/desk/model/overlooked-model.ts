import { computed, effect, type ReadonlySignal, type Signal, signal } from "@preact/signals";
import type { ListedStretch, OverlookedAnswer } from "#shared/api/overlooked.ts";
import type { JobState } from "#shared/api/routes.ts";
import { pointAt } from "#shared/geometry/polyline.ts";
import { type PointMm, pointMm, roundPoint } from "#shared/geometry/types.ts";
import type { Dismissal, TreeDocument } from "#shared/trees/document.ts";

/** Box of a search, two opposite corners, millimetres. */
export interface SearchRegion {
  readonly from: PointMm;
  readonly to: PointMm;
}

/** What the list asks of the program. */
export interface OverlookedSource {
  /** Null = a newer request took over. */
  list(): Promise<OverlookedAnswer | null>;
  /** Starts the search or goes on with it; the job that does it. */
  search(region: SearchRegion | null): Promise<{ readonly job: string }>;
  cancel(job: string): Promise<unknown>;
  onJob(listener: (job: JobState) => void): () => void;
  failed(error: unknown): void;
}

/** The list follows the trees once they rest this long: it is asked for anew, which a whole valve makes dear for every pin. */
const REST_MS = 900;
/** While the search runs the list is asked for at most so often. */
const RUNNING_MS = 3000;

/** The stretches of string that no strand explains, and the search that finds them. */
export class OverlookedModel {
  /** Null until first looked at. */
  readonly answer: Signal<OverlookedAnswer | null> = signal(null);
  /** Key of the stretch looked at. */
  readonly at: Signal<string | null> = signal(null);
  /** The search under way, as it tells of itself. */
  readonly job: Signal<JobState | null> = signal(null);
  /** Stretches that still stand, longest first, then those set aside. */
  readonly shown: ReadonlySignal<readonly ListedStretch[]>;
  readonly standing: ReadonlySignal<readonly ListedStretch[]>;
  private readonly stops: (() => void)[];
  private timer: ReturnType<typeof setTimeout> | undefined;
  private lastLook = 0;

  constructor(
    private readonly source: OverlookedSource,
    document: ReadonlySignal<TreeDocument>,
    private readonly now: () => number = () => performance.now(),
  ) {
    this.shown = computed(() => listed(this.answer.value?.stretches ?? [], document.value.dismissals));
    this.standing = computed(() => this.shown.value.filter(({ dismissedBy }) => dismissedBy === null));
    this.stops = [
      effect(() => {
        document.value;
        if (this.answer.peek() !== null) this.lookLater(REST_MS);
      }),
      source.onJob((job) => this.hear(job)),
    ];
  }

  /** The stretch looked at, while it is listed. */
  get current(): ListedStretch | null {
    return this.shown.value.find(({ key }) => key === this.at.value) ?? null;
  }

  /** Asks for the list. */
  async look(): Promise<void> {
    clearTimeout(this.timer);
    this.lastLook = this.now();
    try {
      const answer = await this.source.list();
      if (answer !== null) this.answer.value = answer;
    } catch (error) {
      this.source.failed(error);
    }
  }

  /** Searches the scan, or goes on where the last search stopped. */
  async search(region: SearchRegion | null): Promise<void> {
    try {
      const { job } = await this.source.search(region);
      this.job.value = { ...STARTED, id: job };
    } catch (error) {
      this.source.failed(error);
    }
  }

  async stopSearch(): Promise<void> {
    const job = this.job.value?.id ?? this.answer.value?.search.job ?? null;
    if (job !== null) await this.source.cancel(job).catch((error: unknown) => this.source.failed(error));
  }

  dispose(): void {
    clearTimeout(this.timer);
    for (const stop of this.stops) stop();
  }

  private hear(job: JobState): void {
    const known = this.job.peek()?.id ?? this.answer.peek()?.search.job;
    if (job.what !== "search" || job.id !== known) return;
    if (job.state === "running") {
      this.job.value = job;
      this.lookLater(Math.max(0, this.lastLook + RUNNING_MS - this.now()));
      return;
    }
    this.job.value = null;
    if (job.error !== undefined) this.source.failed(new Error(job.error.message));
    void this.look();
  }

  private lookLater(ms: number): void {
    clearTimeout(this.timer);
    this.timer = setTimeout(() => void this.look(), ms);
  }
}

const STARTED: JobState = {
  id: "",
  what: "search",
  state: "running",
  progress: 0,
  step: "starting",
  bytesPerSecond: null,
  secondsLeft: null,
};

/** What the person has just set aside or brought back counts at once, before the list comes anew. */
function listed(stretches: readonly ListedStretch[], dismissals: ReadonlyMap<string, Dismissal>): ListedStretch[] {
  return stretches
    .map((stretch): ListedStretch => {
      const dismissal = dismissals.get(stretch.dismissedBy ?? stretch.key);
      return dismissal === undefined
        ? { ...stretch, dismissedBy: null, reason: null }
        : { ...stretch, dismissedBy: dismissal.key, reason: dismissal.reason };
    })
    .sort((a, b) => Number(a.dismissedBy !== null) - Number(b.dismissedBy !== null) || b.lengthMm - a.lengthMm);
}

/** The middle of a stretch, on it. */
export function middleOf({ points, lengthMm }: ListedStretch): PointMm {
  const line = Array.from({ length: points.length / 3 }, (_, i) =>
    pointMm(points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!),
  );
  return roundPoint(pointAt(line, lengthMm / 2));
}
