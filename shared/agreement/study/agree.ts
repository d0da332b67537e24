import { iccValue } from "#shared/agreement/icc.ts";
import type { Reasons } from "#shared/agreement/interval.ts";
import { meanSquares } from "#shared/agreement/mean-squares.ts";
import { positiveAgreementOf } from "#shared/agreement/positive-agreement.ts";
import { type Selection, selectionOf, threeTolerances } from "#shared/agreement/selection.ts";
import { type CategoricalAgreement, categoricalAgreement } from "#shared/agreement/study/categorical.ts";
import { type ContinuousAgreement, continuousAgreement } from "#shared/agreement/study/continuous.ts";
import { type FoundItems, foundItems, markedRows } from "#shared/agreement/study/found-items.ts";
import { type IntraAgreement, intraAgreement, type OwnAgreement, ownAgreement } from "#shared/agreement/study/intra.ts";
import { type MethodAgreement, methodAgreement } from "#shared/agreement/study/method.ts";
import { type NodePlaces, nodePlaces } from "#shared/agreement/study/node-places.ts";
import { comparePassPairs, type PairSummary, passPairs } from "#shared/agreement/study/pairwise.ts";
import {
  itemsAtThree,
  nodeTolerance,
  type SpecimenItems,
  type Study,
  type StudyFile,
  type StudySpecimen,
  studyOf,
} from "#shared/agreement/study/study.ts";
import { comparedPasses, quantitiesOf } from "#shared/agreement/study/study-quantities.ts";
import type { CompareOptions, TimeLeft } from "#shared/compare/comparison.ts";

export interface AgreeOptions {
  /** How two passes are compared; `tolerance` is also the matching gate of strands (nodes: twice as much), millimetres. */
  readonly compare: Omit<CompareOptions, "step">;
  /** Annotator whose files are a computed method's; null = none. */
  readonly method: string | null;
  /** Margin of equivalence set beforehand, millimetres; null = none. */
  readonly margin: number | null;
  /** True when the annotators worked with the engine that the method uses. */
  readonly sameEngine: boolean;
  /** Candidates that every annotator was shown and declined. */
  readonly declinedByAll: number;
  /** Of everything that is drawn. */
  readonly seed: number;
}

/** How far items agree at one tolerance. */
export interface ToleranceResult {
  readonly toleranceMm: number;
  readonly nodeToleranceMm: number;
  readonly strands: readonly ({ readonly specimen: string } & Selection)[];
  readonly nodes: readonly ({ readonly specimen: string } & Selection)[];
  readonly positiveAgreement: number | null;
  readonly quantities: readonly {
    readonly quantity: string;
    readonly completeRows: number;
    readonly iccA1: number | null;
    readonly reasons: Reasons;
  }[];
  readonly reasons: Reasons;
}

/** Agreement between and within annotators over one or more specimens. Lengths in millimetres. */
export interface Agreement {
  readonly passes: readonly {
    readonly file: string;
    readonly specimen: string;
    readonly annotator: string;
    readonly pass: number;
    readonly role: "first" | "repeat" | "method";
    readonly created: string | null;
  }[];
  readonly annotators: readonly string[];
  /** Per-specimen totals: first, since misses enter them. */
  readonly totals: readonly {
    readonly specimen: string;
    readonly passes: readonly {
      readonly annotator: string;
      readonly pass: number;
      readonly origins: number;
      readonly insertions: number;
      readonly length: number;
    }[];
  }[];
  readonly items: {
    /** Strands of all specimens together; `matched` of those that all annotators of a specimen marked. */
    readonly matched: number;
    readonly union: number;
    readonly share: number | null;
    readonly nearGateShare: number | null;
    readonly reasons: Reasons;
    readonly strands: readonly ({ readonly specimen: string } & Selection & ItemProof)[];
    readonly nodes: readonly ({ readonly specimen: string } & Selection & ItemProof)[];
    readonly atTolerances: readonly ToleranceResult[];
  };
  readonly pairwise: readonly PairSummary[];
  readonly continuous: readonly ContinuousAgreement[];
  readonly nodePlaces: readonly NodePlaces[];
  readonly categorical: readonly CategoricalAgreement[];
  readonly detection: FoundItems;
  readonly intra: readonly IntraAgreement[];
  /** Each annotator's drift and agreement with the same annotator's second pass, over specimens. */
  readonly own: readonly OwnAgreement[];
  readonly method: MethodAgreement | null;
  readonly clusteredBy: "specimen";
  readonly notes: readonly string[];
  readonly reasons: Reasons;
}

interface ItemProof {
  readonly exact: boolean;
  readonly note: string;
  readonly indirectPairs: number;
}

/**
 * Everything that can be said of how far annotators agree with each other and with themselves; what cannot be said is null
 * with a reason. The order of the files changes nothing.
 * @throws TautlineError misuse or other-scan, see {@link studyOf}.
 */
export function agree(files: readonly StudyFile[], options: AgreeOptions, timeLeft: TimeLeft): Agreement {
  const study = studyOf(files, options.compare.merge, options.method);
  const pairwise = comparePassPairs(passPairs(study.specimens), options.compare, timeLeft);
  return assembleAgreement(agreementFrame(study, options), pairwise);
}

/** An agreement from its frame and all pairs of passes in order. */
export function assembleAgreement(frame: Omit<Agreement, "pairwise">, pairwise: readonly PairSummary[]): Agreement {
  const open = pairwise.filter((pair) => !pair.exact).length;
  const unproven = `${open} of ${pairwise.length} edit distances are not proven; both bounds are given.`;
  return { ...frame, pairwise, notes: open > 0 ? [...frame.notes, unproven] : frame.notes };
}

/** Everything of an agreement but the pairs of passes, which can be compared elsewhere. */
export function agreementFrame(study: Study, options: AgreeOptions): Omit<Agreement, "pairwise"> {
  const { tolerance, merge } = options.compare;
  const { annotators, specimens } = study;
  const tolerances = threeTolerances(tolerance);
  const atAll = specimens.map((specimen) => itemsAtThree(specimen, tolerance, merge));
  const items = atAll.map((list) => list[1]!);
  const quantities = quantitiesOf(study, items);
  const title = annotators.length === 2 ? "given that both marked it" : `given that all ${annotators.length} marked it`;
  const reasons: Record<string, string> = {};
  if (options.method === null) reasons.method = "No pass was named as a method's.";
  const intra = intraAgreement(specimens, items);
  if (intra.length === 0) reasons.intra = "No annotator did a specimen twice.";
  return {
    passes: passesOf(study),
    annotators,
    totals: totalsOf(specimens),
    items: {
      ...allTogether(
        specimens,
        items.map(({ strands }) => strands),
      ),
      strands: specimens.map((specimen, s) => selectionRow(specimen, items[s]!.strands, tolerance)),
      nodes: specimens.map((specimen, s) => selectionRow(specimen, items[s]!.nodes, nodeTolerance(tolerance))),
      atTolerances: tolerances.map((one, k) =>
        atTolerance(
          study,
          atAll.map((list) => list[k]!),
          one,
        ),
      ),
    },
    continuous: quantities.map((quantity) =>
      continuousAgreement(
        quantity,
        annotators,
        quantity.on === "specimen" ? "totals of each specimen, misses included" : title,
        options.seed,
      ),
    ),
    nodePlaces: nodePlaces(specimens, items),
    categorical: categoricalAgreement(annotators, specimens, items, options.seed),
    detection: foundItems(annotators, specimens, items, options.declinedByAll, options.seed),
    intra,
    own: ownAgreement(annotators, specimens, items),
    method: options.method === null ? null : methodAgreement(options.method, specimens, options.margin, options.sameEngine),
    clusteredBy: "specimen",
    notes: notesOf(study),
    reasons,
  };
}

function selectionRow(specimen: StudySpecimen, table: SpecimenItems["strands"], tolerance: number) {
  const { exact, note, indirectPairs } = table;
  return { specimen: specimen.name, ...selectionOf(table, comparedPasses(specimen), tolerance), exact, note, indirectPairs };
}

/** Strand items of all specimens. */
function allTogether(specimens: readonly StudySpecimen[], tables: readonly SpecimenItems["strands"][]) {
  const rows = specimens.map((specimen, s) => selectionOf(tables[s]!, comparedPasses(specimen), 1));
  const [matched, union] = [rows.reduce((sum, one) => sum + one.matched, 0), rows.reduce((sum, one) => sum + one.union, 0)];
  const gates = tables.flatMap((table) => [...table.matchedGates, ...table.missedGates]);
  const near = gates.filter((gate) => gate > 0.9).length;
  const reasons: Record<string, string> = {};
  if (union === 0) reasons.share = "Nobody marked anything.";
  if (gates.length === 0) reasons.nearGateShare = "No two passes marked the same item.";
  return {
    matched,
    union,
    share: union === 0 ? null : matched / union,
    nearGateShare: gates.length === 0 ? null : near / gates.length,
    reasons,
  };
}

function atTolerance(study: Study, items: readonly SpecimenItems[], tolerance: number): ToleranceResult {
  const { specimens } = study;
  const positive = positiveAgreementOf(specimens.flatMap((specimen, s) => markedRows(specimen, items[s]!, "strands")));
  const quantities = quantitiesOf(study, items).map(({ quantity, rows }) => {
    const complete = rows.flat().flatMap(({ values }) => (values.includes(null) ? [] : [values as readonly number[]]));
    const squares = meanSquares(complete);
    const iccA1 = squares && iccValue("ICC(A,1)", squares);
    const why = squares ? "The items do not differ: there is no spread to compare the error with." : "Too few complete rows.";
    return { quantity, completeRows: complete.length, iccA1, reasons: iccA1 === null ? { iccA1: why } : {} };
  });
  const reasons: Record<string, string> = {};
  if (positive.value === null) reasons.positiveAgreement = positive.reasons.value!;
  return {
    toleranceMm: tolerance,
    nodeToleranceMm: nodeTolerance(tolerance),
    strands: specimens.map((specimen, s) => ({
      specimen: specimen.name,
      ...selectionOf(items[s]!.strands, comparedPasses(specimen), tolerance),
    })),
    nodes: specimens.map((specimen, s) => ({
      specimen: specimen.name,
      ...selectionOf(items[s]!.nodes, comparedPasses(specimen), nodeTolerance(tolerance)),
    })),
    positiveAgreement: positive.value,
    quantities,
    reasons,
  };
}

function passesOf({ specimens }: Study): Agreement["passes"] {
  return specimens.flatMap((specimen) => {
    const facts = (
      { name, annotator, pass, created }: (typeof specimen.passes)[number],
      role: "first" | "repeat" | "method",
    ) => ({
      file: name,
      specimen: specimen.name,
      annotator,
      pass,
      role,
      created,
    });
    const people = specimen.passes.map((pass, p) => facts(pass, specimen.firstPass.includes(p) ? "first" : "repeat"));
    return specimen.method ? [...people, facts(specimen.method, "method")] : people;
  });
}

function totalsOf(specimens: readonly StudySpecimen[]): Agreement["totals"] {
  return specimens.map((specimen) => ({
    specimen: specimen.name,
    passes: specimen.passes.map(({ annotator, pass, measures }) => ({
      annotator,
      pass,
      origins: measures.nodes.filter((node) => node.kind === "origin").length,
      insertions: measures.nodes.filter((node) => node.kind === "insertion").length,
      length: measures.totals.length,
    })),
  }));
}

function notesOf({ annotators, specimens, warnings }: Study): string[] {
  const notes = [...warnings];
  notes.push("Inference is to new specimens by these annotators; items of one specimen are not independent of each other.");
  for (const specimen of specimens) {
    const missing = annotators.filter((_, j) => specimen.firstPass[j]! < 0);
    if (missing.length > 0) notes.push(`${specimen.name} was not done by ${missing.join(", ")}: its rows are incomplete.`);
  }
  return notes;
}
