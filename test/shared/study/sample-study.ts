import { beginningProtocol } from "#shared/study/protocol.ts";
import { protocolHash } from "#shared/study/protocol-change.ts";
import type { StudyRecord } from "#shared/study/study-record.ts";

export interface SamplePlan {
  readonly specimens?: number;
  readonly training?: number;
  readonly annotators?: number;
  readonly passes?: number;
  readonly seed?: string;
  readonly washoutDays?: number;
}

/** A study of invented specimens with a frozen protocol and nothing drawn yet. */
export function sampleStudy(plan: SamplePlan = {}): StudyRecord {
  const { specimens = 4, training = 0, annotators = 2, passes = 2, seed = "5".repeat(64), washoutDays = 14 } = plan;
  const entry = (k: number, isTraining: boolean) => ({
    id: `${isTraining ? "t" : "s"}${String(k).padStart(19, "0")}`,
    name: `HB-${isTraining ? "T" : ""}${k}`,
    training: isTraining,
    sha256: String(k % 10).repeat(64),
  });
  const beginning = beginningProtocol();
  const content = {
    ...beginning,
    analysis: { ...beginning.analysis, primary: "total length" as const },
    schedule: { washoutDays },
  };
  const id = "y0000000000000000001";
  return {
    format: "tautline-study",
    version: 1,
    id,
    name: "Harrow Bay",
    created: 1000,
    seed,
    specimens: [
      ...Array.from({ length: specimens }, (_, k) => entry(k + 1, false)),
      ...Array.from({ length: training }, (_, k) => entry(k + 1, true)),
    ],
    annotators: Array.from({ length: annotators }, (_, k) => ({ name: `AN-${k + 1}`, fingerprint: null })),
    passes,
    protocols: [{ version: 1, content, frozen: { at: 2000, sha256: protocolHash(id, { version: 1, content }) }, reason: "" }],
    assignments: [],
    events: [],
  };
}
