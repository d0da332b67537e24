import type { Vec3 } from "#shared/geometry/types.ts";

/** One column of a table. */
export interface ReportColumn {
  readonly name: string;
  /** Numbers stand to the right, words to the left. */
  readonly words?: boolean;
}

/** A table of ready text. A cell may end in a mark such as "a)" that the notes under the table explain. */
export interface ReportTable {
  readonly kind: "table";
  readonly caption: string;
  readonly columns: readonly ReportColumn[];
  /** shape [rows][columns] */
  readonly rows: readonly (readonly string[])[];
  /** Sentences under the table, each with its mark where cells point to it. */
  readonly notes: readonly string[];
}

/** Text of one weight: a refusal says in words what cannot be known; quiet text defines terms. */
export interface ReportText {
  readonly kind: "text";
  readonly tone: "plain" | "quiet" | "refusal" | "caution";
  readonly text: string;
}

export interface ReportList {
  readonly kind: "list";
  readonly items: readonly string[];
}

/** Drawings as SVG without scripts, styles or outside parts; everything in them is told by shape or dash beside colour. */
export interface ReportFigure {
  readonly kind: "figure";
  readonly svgs: readonly string[];
  readonly caption: string;
}

/** A heading inside a section. */
export interface ReportHeading {
  readonly kind: "heading";
  readonly text: string;
}

export type ReportBlock = ReportTable | ReportText | ReportList | ReportFigure | ReportHeading;

/** One part of the report under its own heading. */
export interface ReportSection {
  /** Kebab-case name that a link can point to; the same in every report. */
  readonly id: string;
  readonly title: string;
  readonly blocks: readonly ReportBlock[];
}

/** A strand as one annotator drew it, with how far the others' are from it. */
export interface SpreadStrand {
  readonly specimen: string;
  /** Name of the tree in the pass that it is drawn from. */
  readonly tree: string;
  /** Annotators whose first pass has the strand, and annotators who did the specimen. */
  readonly markedBy: number;
  readonly of: number;
  /** shape [n], from the origin on, millimetres. */
  readonly line: readonly Vec3[];
  /** shape [n]: root mean square distance to the trees of the other annotators who have the strand, millimetres; empty where nobody else drew it. */
  readonly spreadMm: readonly number[];
}

/** A whole report as data: the page and the HTML file show the same sections. */
export interface AgreementReport {
  readonly title: string;
  readonly subtitle: string;
  readonly sections: readonly ReportSection[];
  /** Where in space annotators differ, for a view that can be turned. */
  readonly spread: readonly SpreadStrand[];
}

/** Seconds and counts of one pass, from its log. */
export interface PassEffort {
  readonly specimen: string;
  readonly annotator: string;
  readonly pass: number;
  readonly secondsAtWork: number | null;
  readonly edits: number;
  readonly undos: number;
  readonly trees: number;
}

/** What the study's protocol settled beforehand; null or empty where it says nothing. */
export interface ReportProtocol {
  readonly id: string;
  readonly version: number;
  readonly sha256: string | null;
  /** ISO 8601; null = not frozen. */
  readonly frozen: string | null;
  readonly primaryQuantity: string | null;
  readonly minimumDiameterMm: number | null;
  readonly washoutDays: number | null;
  /** One sentence a rule: origin, insertion, fork. */
  readonly pointRules: readonly string[];
}

/** What the passes themselves do not say. */
export interface ReportContext {
  readonly title: string | null;
  readonly software: { readonly name: string; readonly version: string };
  /** ISO 8601; null = not printed. */
  readonly madeAt: string | null;
  readonly protocol: ReportProtocol | null;
  /** How annotators were kept from knowing each other's work and their own earlier pass, a sentence each; null = not known. */
  readonly blinding: readonly string[] | null;
  /** How the number of specimens was settled; null = not known. */
  readonly sampleSize: string | null;
  /** Who the annotators are (training, experience), a sentence each; null = not known. */
  readonly annotators: readonly string[] | null;
  /** Null when the passes come from tree files alone, which do not hold it. */
  readonly effort: readonly PassEffort[] | null;
  /** Pause after which time no longer counts as work, seconds; null without effort. */
  readonly idleSeconds: number | null;
}
