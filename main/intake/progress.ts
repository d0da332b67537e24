import type { SliceSource } from "#main/intake/slice-source.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";

/** How far an intake is. Rate and time left are null until they can be told. */
export interface IntakeProgress {
  /** 0-1 */
  readonly progress: number;
  /** What is being done now, in words. */
  readonly step: string;
  /** Voxel bytes of the source per second. */
  readonly bytesPerSecond: number | null;
  readonly secondsLeft: number | null;
}

const REPORT_EVERY_MS = 200;
const SETTLE_MS = 1000;

/** Turns slices done into progress, at most five times a second and once at the end of each step. */
export class ProgressMeter {
  readonly #slices: number;
  readonly #sliceBytes: number;
  readonly #now: () => number;
  readonly #report: ((progress: IntakeProgress) => void) | undefined;
  /** Share of the whole that the survey of values takes, where there is one. */
  readonly #surveyShare: number;
  #step = "";
  #began = 0;
  #last = Number.NEGATIVE_INFINITY;
  #from = 0;
  #to = 1;

  constructor(source: SliceSource, now: () => number, report: ((progress: IntakeProgress) => void) | undefined, survey: boolean) {
    const [nx, ny, nz] = source.header.size;
    this.#slices = nz;
    this.#sliceBytes = nx * ny * BYTES_OF_DTYPE[source.header.dtype];
    this.#now = now;
    this.#report = report;
    this.#surveyShare = survey ? 0.3 : 0;
  }

  begin(step: "Looking at every value" | "Taking in the scan" | "Looking through the scan"): void {
    this.#step = step;
    this.#began = this.#now();
    [this.#from, this.#to] = step === "Looking at every value" ? [0, this.#surveyShare] : [this.#surveyShare, 1];
    this.#tell(0);
  }

  slices(done: number): void {
    if (done < this.#slices && this.#now() - this.#last < REPORT_EVERY_MS) return;
    this.#tell(done);
  }

  #tell(done: number): void {
    this.#last = this.#now();
    const elapsed = this.#last - this.#began;
    const known = done > 0 && elapsed >= SETTLE_MS;
    this.#report?.({
      progress: this.#from + (this.#to - this.#from) * (done / this.#slices),
      step: this.#step,
      bytesPerSecond: known ? Math.round((done * this.#sliceBytes * 1000) / elapsed) : null,
      secondsLeft: known ? Math.round((elapsed * (this.#slices - done)) / done / 1000) : null,
    });
  }
}
