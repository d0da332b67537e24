import { type PlannedSubjects, specimensFor, subjectsForTest, subjectsForWidth } from "#shared/agreement/planning.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";

/** What a lead says about a study to be planned, as typed. */
export interface PlanningDraft {
  /** `width`: how narrow the interval shall be; `test`: that agreement exceeds a least acceptable one. */
  readonly goal: "width" | "test";
  /** Where the quantity is taken: once a specimen, or on each strand. */
  readonly per: "specimen" | "strand";
  readonly annotators: string;
  /** Intraclass correlation that is expected, 0-1. */
  readonly expected: string;
  /** Width of the whole 95 % interval. */
  readonly width: string;
  /** Least acceptable intraclass correlation, 0-1. */
  readonly least: string;
  /** 0-1 */
  readonly power: string;
  readonly strandsPerSpecimen: string;
  /** Correlation of strands of one specimen, 0-1. */
  readonly rho: string;
}

export const FIRST_PLANNING: PlanningDraft = {
  goal: "width",
  per: "specimen",
  annotators: "3",
  expected: "0.8",
  width: "0.2",
  least: "0.6",
  power: "0.8",
  strandsPerSpecimen: "60",
  rho: "0.1",
};

/** The answer in specimens, with the steps to it; or what is wrong with what was typed. */
export type PlanningAnswer =
  | { readonly kind: "problem"; readonly sentence: string }
  | {
      readonly kind: "answer";
      readonly specimens: number;
      /** Independent subjects by the formula, before rounding up. */
      readonly exact: number;
      readonly subjects: number;
      /** Bonett's correction for two annotators took part. */
      readonly corrected: boolean;
      readonly source: string;
      /** Only for quantities taken on each strand. */
      readonly clustered: { readonly designEffect: number; readonly strands: number } | null;
    };

const WIDTH_SOURCE = "Bonett, Stat Med 2002;21:1331-1335";
const TEST_SOURCE = "Walter, Eliasziw & Donner, Stat Med 1998;17:101-110";

/** How many specimens a study needs. Nothing is thrown: what cannot be counted comes back as a sentence. */
export function planningAnswer(draft: PlanningDraft): PlanningAnswer {
  try {
    const { planned, corrected, source } = plannedSubjects(draft);
    const facts = { exact: planned.exact, subjects: planned.subjects, corrected, source };
    if (draft.per === "specimen") return { kind: "answer", specimens: planned.subjects, ...facts, clustered: null };
    const strands = numberOf(draft.strandsPerSpecimen, "strands a specimen");
    const found = specimensFor(planned, strands, numberOf(draft.rho, "correlation of strands of one specimen"));
    return {
      kind: "answer",
      specimens: found.specimens,
      ...facts,
      clustered: { designEffect: found.designEffect, strands: found.strands },
    };
  } catch (error) {
    if (isTautlineError(error, "misuse")) return { kind: "problem", sentence: error.message };
    throw error;
  }
}

function plannedSubjects(draft: PlanningDraft): { planned: PlannedSubjects; corrected: boolean; source: string } {
  const expected = numberOf(draft.expected, "expected intraclass correlation");
  const annotators = numberOf(draft.annotators, "number of annotators");
  if (draft.goal === "width") {
    const planned = subjectsForWidth(expected, annotators, numberOf(draft.width, "interval width"));
    return { planned, corrected: planned.corrected, source: WIDTH_SOURCE };
  }
  const least = numberOf(draft.least, "least acceptable intraclass correlation");
  const planned = subjectsForTest(least, expected, annotators, numberOf(draft.power, "power"));
  return { planned, corrected: false, source: TEST_SOURCE };
}

/** A typed number; a decimal comma is understood. NaN is refused here, so that the sentence names the field. */
function numberOf(text: string, what: string): number {
  const value = text.trim() === "" ? Number.NaN : Number(text.trim().replace(",", "."));
  if (Number.isFinite(value)) return value;
  throw new TautlineError("misuse", `Planning expects a number for the ${what}, found "${text}". Correct the value.`, { what });
}
