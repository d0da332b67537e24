import { DEFAULT_SEVERITY, type Severity, type StructureCode } from "#shared/checks/finding.ts";
import type { LabelPlace, PointRule, PrimaryQuantity, ProtocolContent } from "#shared/study/protocol.ts";

/** A label as it is being typed. */
export interface LabelDraft {
  readonly label: string;
  readonly on: LabelPlace;
  /** Values, one between two commas; empty = any. */
  readonly values: string;
  readonly required: boolean;
}

/** A protocol as it is being typed: numbers stay text until they are used. */
export interface ProtocolDraft {
  readonly labels: readonly LabelDraft[];
  readonly points: readonly PointRule[];
  readonly minimumDiameter: string;
  readonly minimumLength: string;
  readonly mostBranches: string;
  readonly severities: Readonly<Record<string, Severity | "off">>;
  readonly remarks: string;
  readonly primary: PrimaryQuantity | "";
  readonly tolerance: string;
  readonly merge: string;
  readonly positionScale: string;
  readonly margin: string;
  readonly washoutDays: string;
}

/** Checks whose weight a protocol may set. */
export const CHECK_CODES = Object.keys(DEFAULT_SEVERITY) as readonly StructureCode[];

/** A protocol's content as text to edit. */
export function draftOf({ drawing, analysis, schedule }: ProtocolContent): ProtocolDraft {
  const { minimumDiameterMm, minimumLengthMm, mostBranches, severities } = drawing.limits;
  return {
    labels: drawing.labels.map((label) => ({ ...label, values: label.values.join(", ") })),
    points: drawing.points,
    minimumDiameter: textOf(minimumDiameterMm),
    minimumLength: textOf(minimumLengthMm),
    mostBranches: textOf(mostBranches),
    severities,
    remarks: drawing.remarks,
    primary: analysis.primary ?? "",
    tolerance: textOf(analysis.toleranceMm),
    merge: textOf(analysis.mergeMm),
    positionScale: textOf(analysis.positionScaleMm),
    margin: textOf(analysis.marginMm),
    washoutDays: textOf(schedule.washoutDays),
  };
}

/** What was typed as a protocol's content, or what cannot be understood of it, one sentence each. */
export function contentOf(
  draft: ProtocolDraft,
): { readonly content: ProtocolContent } | { readonly problems: readonly string[] } {
  const problems: string[] = [];
  const optional = (text: string, what: string, whole = false): number | null =>
    text.trim() === "" ? null : number(text, what, whole);
  const number = (text: string, what: string, whole = false): number => {
    const value = text.trim() === "" ? Number.NaN : Number(text.trim().replace(",", "."));
    if (Number.isFinite(value) && value >= 0 && (!whole || Number.isInteger(value))) return value;
    problems.push(`${what}: a ${whole ? "whole " : ""}number of 0 or more is expected, found "${text}".`);
    return 0;
  };
  const positive = (text: string, what: string): number => {
    const before = problems.length;
    const value = number(text, what);
    if (problems.length === before && value === 0) problems.push(`${what}: more than 0 is expected.`);
    return value;
  };
  for (const [k, { label }] of draft.labels.entries())
    if (label.trim() === "") problems.push(`Label ${k + 1} has no word. Give it one, or take it out.`);
  const content: ProtocolContent = {
    drawing: {
      labels: draft.labels.map(({ label, on, values, required }) => ({
        label: label.trim(),
        on,
        values: values
          .split(",")
          .map((value) => value.trim())
          .filter((value) => value !== ""),
        required,
      })),
      points: draft.points.map((rule) => ({ ...rule, point: rule.point.trim(), text: rule.text.trim() })),
      limits: {
        minimumDiameterMm: optional(draft.minimumDiameter, "Minimum diameter"),
        minimumLengthMm: optional(draft.minimumLength, "Minimum length"),
        mostBranches: optional(draft.mostBranches, "Most branches at a fork", true),
        severities: draft.severities,
      },
      remarks: draft.remarks.trim(),
    },
    analysis: {
      primary: draft.primary === "" ? null : draft.primary,
      toleranceMm: positive(draft.tolerance, "Matching tolerance"),
      mergeMm: number(draft.merge, "Forks count as one below"),
      positionScaleMm: positive(draft.positionScale, "Displacement as dear as an insertion"),
      marginMm: optional(draft.margin, "Margin"),
    },
    schedule: { washoutDays: number(draft.washoutDays, "Days between repeats", true) },
  };
  return problems.length > 0 ? { problems } : { content };
}

function textOf(value: number | null): string {
  return value === null ? "" : String(value);
}
