import type { Severity } from "#shared/checks/finding.ts";

/** What the labels of a protocol stand on. */
export type LabelPlace = "origin" | "fork" | "insertion" | "end" | "strand";

/** A label that the protocol asks for. */
export interface ProtocolLabel {
  /** The label's word: a known one (`leaflet`, `segment`, `zone`, `cleft`, `strut`, `muscle`, `head`, `site`) or one of the protocol's own. */
  readonly label: string;
  readonly on: LabelPlace;
  /** The values to choose from; empty = as the known label has them, or free text. */
  readonly values: readonly string[];
  readonly required: boolean;
}

/** Where exactly a point is set, in words and with a still picture. */
export interface PointRule {
  /** `origin`, `insertion`, `fork`, or a word of the protocol's own. */
  readonly point: string;
  readonly text: string;
  /** SHA-256 (hex) of a PNG kept with the study; null = none. */
  readonly picture: string | null;
}

/** What is drawn and what is not, and what the checks hold a pass against. Null = no limit. */
export interface DrawingLimits {
  /** Strings thinner than this are not drawn, millimetres; also the diameter above which OT is reported. */
  readonly minimumDiameterMm: number | null;
  /** Stretches shorter than this are not drawn and not shown as overlooked, millimetres. */
  readonly minimumLengthMm: number | null;
  /** More branches at one fork than this are a finding. */
  readonly mostBranches: number | null;
  /** Severity of a check's finding, by its code, where it differs from the program's own; `off` = not reported. */
  readonly severities: Readonly<Record<string, Severity | "off">>;
}

/** The part of a protocol that an annotator works by; it travels with every assignment. */
export interface DrawingRules {
  readonly labels: readonly ProtocolLabel[];
  readonly points: readonly PointRule[];
  readonly limits: DrawingLimits;
  /** Anything else an annotator must know. */
  readonly remarks: string;
}

/** Quantities a study can be about; the words are those of the agreement's results. */
export const PRIMARY_QUANTITIES = [
  "total length",
  "origins",
  "insertions",
  "strand length",
  "path length",
  "mean radius",
  "straightness angle",
  "branching angle",
  "mean distance",
  "positive agreement",
] as const;
export type PrimaryQuantity = (typeof PRIMARY_QUANTITIES)[number];

/** What the numbers will be, set before any is seen. Lengths in millimetres. */
export interface AnalysisPlan {
  /** The one quantity the study is about; null = not chosen yet (a protocol cannot be frozen so). */
  readonly primary: PrimaryQuantity | null;
  /** Gate within which strands match; results are repeated at half and twice of it, and nodes have twice as much. */
  readonly toleranceMm: number;
  /** Forks joined by shorter strands are one. */
  readonly mergeMm: number;
  readonly positionScaleMm: number;
  /** Margin of equivalence for a method; null = none, and then there is no verdict. */
  readonly marginMm: number | null;
}

/** When the same specimen may go to the same annotator again. */
export interface SchedulePlan {
  /** Whole days from a returned pass to the next assignment of the same specimen. */
  readonly washoutDays: number;
}

/** All that a protocol says. */
export interface ProtocolContent {
  readonly drawing: DrawingRules;
  readonly analysis: AnalysisPlan;
  readonly schedule: SchedulePlan;
}

/** One version of a study's protocol. Frozen versions never change. */
export interface ProtocolVersion {
  /** From 1. */
  readonly version: number;
  readonly content: ProtocolContent;
  /** Null while it is being edited. `sha256`: see `protocolHash`. */
  readonly frozen: { readonly at: number; readonly sha256: string } | null;
  /** Why it was made; empty for the first. */
  readonly reason: string;
}

/**
 * A protocol to begin with: the point rules of the trade, no picture, no primary quantity, two weeks between repeats. The
 * numbers are common practice, without a source.
 */
export function beginningProtocol(): ProtocolContent {
  return {
    drawing: {
      labels: [
        { label: "leaflet", on: "insertion", values: [], required: true },
        { label: "zone", on: "insertion", values: [], required: false },
        { label: "muscle", on: "origin", values: [], required: true },
        { label: "strut", on: "strand", values: [], required: false },
      ],
      points: [
        { point: "origin", text: "The last cross-section whose outline is separate from muscle.", picture: null },
        {
          point: "insertion",
          text: "The last cross-section separate from leaflet; of a fan, its middle, with a width.",
          picture: null,
        },
        { point: "fork", text: "The point nearest to the extrapolated centrelines.", picture: null },
      ],
      limits: { minimumDiameterMm: null, minimumLengthMm: null, mostBranches: null, severities: {} },
      remarks: "",
    },
    analysis: { primary: null, toleranceMm: 0.5, mergeMm: 0.3, positionScaleMm: 2, marginMm: null },
    schedule: { washoutDays: 14 },
  };
}

/** What keeps a protocol from being frozen, one sentence each; empty when nothing does. */
export function missingFromProtocol({ drawing, analysis }: ProtocolContent): string[] {
  const missing: string[] = [];
  if (analysis.primary === null) missing.push("Choose the primary quantity: it is set before any number is seen.");
  for (const point of ["origin", "insertion", "fork"]) {
    const rule = drawing.points.find((one) => one.point === point);
    if (!rule || rule.text.trim() === "") missing.push(`Say where the ${point} is set.`);
  }
  const twice = drawing.points.map(({ point }) => point).filter((point, i, all) => all.indexOf(point) !== i);
  for (const point of new Set(twice)) missing.push(`There are two rules for the point '${point}': leave one.`);
  return missing;
}

/** What is worth knowing about a protocol although it can be frozen, one sentence each. */
export function remarksOnProtocol({ drawing, analysis, schedule }: ProtocolContent): string[] {
  const remarks: string[] = [];
  for (const { point, picture } of drawing.points)
    if (picture === null) remarks.push(`The rule for the ${point} has no still picture.`);
  if (analysis.marginMm === null) remarks.push("Without a margin there will be no verdict on a method.");
  if (drawing.limits.minimumDiameterMm === null)
    remarks.push("Without a minimum diameter, overlap above it (OT) is not reported.");
  if (schedule.washoutDays === 0) remarks.push("Without days between repeats, an annotator may remember the valve.");
  return remarks;
}
