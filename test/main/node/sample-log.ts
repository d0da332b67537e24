import type { LogAnswer } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { PassHistory } from "#shared/log/history.ts";

/** A counter in the place of random bytes: ids differ and repeat from run to run. */
export function countingBytes(): (count: number) => Uint8Array {
  let calls = 0;
  return (count) => {
    calls += 1;
    return Uint8Array.from({ length: count }, (_, i) => (calls >> (4 * (i % 8))) & 255);
  };
}

/** The window's side of a pass: makes the lines of edits as the desk does. */
export class SampleWriter {
  readonly history: PassHistory;
  #t = 1_000_000;

  constructor(log: Pick<LogAnswer, "lines">) {
    this.history = PassHistory.fromLines(log.lines);
  }

  /** The lines of one more tree. */
  edit(name = "tree"): string[] {
    this.#t += 1000;
    const id = this.history.nextId("tree");
    const to = { id, name: `${name} ${id}`, root: null };
    return this.history.commit({ code: "start-tree", changes: [{ table: "tree", id, from: null, to }] }, "Begin a tree", [], {
      t: this.#t,
      mono: this.#t,
      session: "sample",
    });
  }
}

/** A specimen record of a tiny scan. */
export function sampleSpecimen(id: string): SpecimenRecord {
  return {
    format: "tautline-specimen",
    version: 1,
    id,
    name: "HB-07",
    created: 1,
    synthetic: false,
    source: { name: "hb-07.nrrd", family: "NRRD", bytes: 8, dtype: "uint8" },
    volume: {
      sha256: "0".repeat(64),
      dtype: "uint8",
      size: sizeXyz(2, 2, 2),
      spacing: spacingMm(0.04, 0.04, 0.04),
      origin: pointMm(0, 0, 0),
      direction: IDENTITY3,
      frame: "LPS",
      handedness: "unknown",
      blurFwhmMm: null,
      range: { min: 0, max: 1 },
    },
    conversions: [],
    polarity: "bright",
    display: { low: 0, high: 1 },
    facts: {},
    landmarks: {},
  };
}
