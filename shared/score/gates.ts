import type { CandidateScore } from "#shared/score/score-candidate.ts";

/** What a candidate must reach; null = not asked for. */
export interface Gates {
  /** Share of reference trees that must be accepted at the limit. */
  readonly leastAccepted: number | null;
  /** Share of the reference's length that must be within tolerance of the candidate. */
  readonly leastRecall: number | null;
  /** Share of the candidate's length that must be within tolerance of the reference. */
  readonly leastPrecision: number | null;
  /** Mean distance of the centrelines, millimetres. */
  readonly mostMeanDistance: number | null;
}

export interface GateFailure {
  readonly candidate: string;
  readonly gate: keyof Gates;
  readonly asked: number;
  /** Null when the value could not be given, which fails the gate too. */
  readonly reached: number | null;
  readonly message: string;
}

/** The gates a candidate fails, in the order of {@link Gates}; empty when it passes. */
export function failedGates(score: CandidateScore, gates: Gates): GateFailure[] {
  const { whole } = score;
  const checks: [keyof Gates, number | null, "least" | "most", string][] = [
    ["leastAccepted", score.acceptedShare, "least", "share of reference trees accepted"],
    ["leastRecall", whole.detection.length.recall, "least", "recall by length"],
    ["leastPrecision", whole.detection.length.precision, "least", "precision by length"],
    ["mostMeanDistance", whole.distances.mean, "most", "mean distance in mm"],
  ];
  return checks.flatMap(([gate, reached, side, words]) => {
    const asked = gates[gate];
    if (asked === null) return [];
    const passes = reached !== null && (side === "least" ? reached >= asked - 1e-12 : reached <= asked + 1e-12);
    if (passes) return [];
    const found = reached === null ? "it cannot be given" : `found ${reached.toFixed(4)}`;
    return [
      {
        candidate: score.candidate,
        gate,
        asked,
        reached,
        message: `${score.candidate}: ${words} must be at ${side} ${asked}, ${found}.`,
      },
    ];
  });
}
