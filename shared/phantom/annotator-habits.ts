/** A deviation in two parts: what the annotator does the same way in every pass, and what differs from pass to pass; standard deviations. */
export interface Deviation {
  readonly own: number;
  readonly pass: number;
}

/**
 * How often and how far an invented annotator errs. Shares are 0-1 of the places where the mistake is possible; lengths in
 * millimetres.
 */
export interface AnnotatorHabits {
  readonly annotator: string;
  /** Share of thin branches that are not seen. */
  readonly missed: number;
  /** Share of crossings at which each string is followed into the other's tail. */
  readonly exchangedTails: number;
  /** Share of long end strands that are ended {@link SHORT_END_MM} too early. */
  readonly shortEnds: number;
  /** Share of insertions on a leaflet that get a neighbouring segment's name. */
  readonly wrongSegments: number;
  /** Chance that a later pass decides as the first did instead of anew: missed, exchanged, short or wrong again. */
  readonly sameAgain: number;
  /** Forks are placed this far towards the muscle, on average. */
  readonly forkLowMm: number;
  /** Spread of origins and forks along each axis. */
  readonly placeMm: Deviation;
  /** Ends are set this far before the leaflet, on average; below zero is beyond. */
  readonly endShortMm: number;
  /** Further than that in each later pass: drift. */
  readonly endDriftMm: number;
  /** Spread of ends along their strand. */
  readonly endMm: Deviation;
  /** Read radius / true radius, on average. */
  readonly radiusFactor: number;
  /** Spread of that factor from strand to strand. */
  readonly radiusSpread: number;
  /** How far lines sway beside the true ones, at most about. */
  readonly swayMm: number;
}

/** How far before the leaflet a strand is ended by mistake, millimetres: beyond the tolerance at which ends match. */
export const SHORT_END_MM = 2.2;

const STEADY = {
  sameAgain: 0.5,
  placeMm: { own: 0.08, pass: 0.06 },
  endMm: { own: 0.12, pass: 0.08 },
  endDriftMm: 0,
  radiusFactor: 1,
  radiusSpread: 0.04,
  swayMm: 0.03,
} as const;

/**
 * The three annotators of the demo study. AN-1 misses thin branches; AN-2 sets ends early, more so the second time, and takes
 * the wrong string at crossings; AN-3 places forks low, reads radii large, ends some strands far too early and mistakes segments.
 */
export const DEMO_HABITS: readonly AnnotatorHabits[] = [
  {
    ...STEADY,
    annotator: "AN-1",
    missed: 0.2,
    exchangedTails: 0,
    shortEnds: 0,
    wrongSegments: 0.03,
    forkLowMm: 0,
    endShortMm: 0,
  },
  {
    ...STEADY,
    annotator: "AN-2",
    missed: 0.05,
    exchangedTails: 0.5,
    shortEnds: 0,
    wrongSegments: 0.05,
    forkLowMm: 0,
    endShortMm: 0.25,
    endDriftMm: 0.2,
  },
  {
    ...STEADY,
    annotator: "AN-3",
    missed: 0.1,
    exchangedTails: 0,
    shortEnds: 0.06,
    wrongSegments: 0.12,
    forkLowMm: 0.35,
    placeMm: { own: 0.1, pass: 0.1 },
    endShortMm: 0,
    radiusFactor: 1.08,
  },
];

/** How fast an annotator of the demo study works, and what share of trees is taken back once and drawn again. */
export const DEMO_PACE: Readonly<Record<string, { readonly secondsPerTree: number; readonly takenBack: number }>> = {
  "AN-1": { secondsPerTree: 48, takenBack: 0.1 },
  "AN-2": { secondsPerTree: 30, takenBack: 0.05 },
  "AN-3": { secondsPerTree: 40, takenBack: 0.25 },
};
