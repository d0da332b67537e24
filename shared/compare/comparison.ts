import type { CostPreset } from "#shared/compare/costs.ts";
import type { Detection } from "#shared/compare/detection.ts";
import type { OriginRule } from "#shared/compare/edit-distance/edit-distance.ts";
import type { EditStep } from "#shared/compare/edit-distance/script.ts";
import type { CompareEvent } from "#shared/compare/events/compare-event.ts";
import type { LineDistances, Overlap } from "#shared/compare/overlap.ts";

export interface CompareOptions {
  readonly preset: CostPreset;
  readonly origin: OriginRule;
  /** Millimetres; used by `geometry` alone. */
  readonly positionScale: number;
  /** Forks joined by shorter strands are one; millimetres. */
  readonly merge: number;
  /** Millimetres. */
  readonly tolerance: number;
  readonly minimumDiameter: number | null;
  /** Sampling step of overlap and distances, millimetres. */
  readonly step: number;
}

export interface NormalisedDistance {
  /** Distance / (cost of deleting A and inserting B); 0 when both are empty. */
  readonly pair: number;
  /** Distance / cost of all of A; null when A is empty; may exceed 1. */
  readonly reference: number | null;
}

export interface ComparedPair {
  readonly a: string;
  readonly b: string;
  readonly affinity: number;
  readonly sizes: { readonly a: TreeSize; readonly b: TreeSize };
  readonly ged: number;
  readonly lower: number;
  readonly upper: number;
  readonly exact: boolean;
  readonly normalised: NormalisedDistance;
  readonly script: readonly EditStep[];
  readonly events: readonly CompareEvent[];
  readonly overlap: Overlap;
  readonly distances: LineDistances;
}

export interface TreeSize {
  readonly nodes: number;
  readonly strands: number;
}

export interface Comparison {
  readonly costs: {
    readonly preset: CostPreset;
    readonly origin: OriginRule;
    readonly positionScale: number | null;
    readonly merge: number;
  };
  readonly pairs: readonly ComparedPair[];
  readonly onlyA: readonly string[];
  readonly onlyB: readonly string[];
  readonly crossLinks: {
    readonly matched: readonly (readonly [string, string])[];
    readonly onlyA: readonly string[];
    readonly onlyB: readonly string[];
  };
  readonly warnings: readonly string[];
  readonly whole: ComparedWhole;
}

/** All of A against all of B: distances summed, overlap, distances and detection of each side against the whole other side. */
export interface ComparedWhole {
  readonly ged: number;
  readonly lower: number;
  readonly upper: number;
  readonly exact: boolean;
  readonly normalised: NormalisedDistance;
  readonly overlap: Overlap;
  readonly distances: LineDistances;
  readonly detection: Detection;
}

/** What a comparison is doing; `begun` and `of` count pairs, both 0 where nothing is counted. */
export interface CompareProgress {
  readonly stage: "matching" | "pairs" | "events" | "whole";
  readonly begun: number;
  readonly of: number;
}

/** Hears what a comparison is doing. */
export type TellProgress = (progress: CompareProgress) => void;

/** Wall time in milliseconds that is left; asked now and then, so that a clock need not be known here. */
export type TimeLeft = () => number;
