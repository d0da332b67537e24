import { affinities } from "#shared/compare/affinity.ts";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { bestMatching } from "#shared/compare/edit-distance/assignment.ts";
import { resample } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { measureTrees } from "#shared/measure/measure-trees.ts";
import { centreline, type PlainNode, type PlainSet, type PlainTree } from "#shared/trees/plain-trees.ts";

/** How many of the reference's strands of one kind were found. */
export interface DetectionGroup {
  readonly true: number;
  readonly missed: number;
  readonly recall: number;
}

export interface Detection {
  readonly count: {
    readonly true: number;
    readonly missed: number;
    readonly extra: number;
    readonly recall: number | null;
    readonly precision: number | null;
  };
  readonly length: { readonly recall: number | null; readonly precision: number | null };
  /** The reference's strands by branch order; strands that no root reaches stand under null. */
  readonly byOrder: readonly (DetectionGroup & { readonly order: number | null })[];
  /** The reference's end strands by the labels of their ends; unlabelled ends are left out. */
  readonly byLabel: readonly (DetectionGroup & { readonly label: EndLabel; readonly value: string })[];
  readonly reasons: Readonly<Record<string, string>>;
}

/** Labels of an end that detection is told apart by. */
const END_LABELS = ["leaflet", "segment", "zone"] as const;
/** A label of an end that detection is told apart by. */
export type EndLabel = (typeof END_LABELS)[number];

/**
 * How many of A's strands B has, one to one by affinity, a pair being true when at least half of each lies within
 * tolerance of the other; and the same by length. Strands are those of the canonical form, so that waypoints do not count.
 * @param step sampling step, millimetres.
 */
export function detection(a: PlainSet, b: PlainSet, mergeMm: number, toleranceMm: number, step: number): Detection {
  const [linesA, linesB] = [canonicalLines(a, mergeMm), canonicalLines(b, mergeMm)];
  const table = affinities(linesA, linesB, step);
  const matched = bestMatching(linesA.length, linesB.length, table.affinity);
  const isFound = Array.from(
    matched,
    (j, i) =>
      j >= 0 &&
      shareWithin(linesA[i]!, [linesB[j]!], toleranceMm, step) >= 0.5 &&
      shareWithin(linesB[j]!, [linesA[i]!], toleranceMm, step) >= 0.5,
  );
  const found = isFound.filter(Boolean).length;
  const facts = strandFacts(a, mergeMm);
  const reasons: Record<string, string> = {};
  if (linesA.length === 0) reasons.recall = "The reference has no strand.";
  if (linesB.length === 0) reasons.precision = "The compared side has no strand.";
  return {
    count: {
      true: found,
      missed: linesA.length - found,
      extra: linesB.length - found,
      recall: linesA.length === 0 ? null : found / linesA.length,
      precision: linesB.length === 0 ? null : found / linesB.length,
    },
    length: {
      recall: linesA.length === 0 ? null : shareWithin(linesA.flat(), linesB, toleranceMm, step),
      precision: linesB.length === 0 ? null : shareWithin(linesB.flat(), linesA, toleranceMm, step),
    },
    byOrder: grouped(
      facts.map((fact) => fact.order),
      isFound,
    )
      .map(({ value, ...group }) => ({ order: value, ...group }))
      .sort((x, y) => (x.order ?? Number.POSITIVE_INFINITY) - (y.order ?? Number.POSITIVE_INFINITY)),
    byLabel: END_LABELS.flatMap((label) =>
      grouped(
        facts.map((fact) => fact.labels?.[label]),
        isFound,
      ).flatMap(({ value, ...group }) => (value === undefined ? [] : [{ label, value, ...group }])),
    ),
    reasons,
  };
}

/** Branch order of each canonical strand of a set, and the labels of the end it leads to; in the order of {@link canonicalLines}. */
function strandFacts(set: PlainSet, mergeMm: number): { order: number | null; labels: PlainNode | undefined }[] {
  return set.trees.flatMap((tree) => {
    const orders = new Map(measureTrees({ trees: [tree] }).strands.map((strand) => [strand.id, strand.order]));
    const nodes = new Map(tree.nodes.map((node) => [node.id, node]));
    const canonical = canonicalTree(tree, mergeMm);
    return canonical.strands.map((strand) => {
      const end = [strand.from, strand.to].map((k) => canonical.nodes[k]!).find((node) => node.type === "end");
      return { order: orders.get(strand.id) ?? null, labels: end && nodes.get(end.id) };
    });
  });
}

/** Counts of found and missed strands for each value that occurs, in order of first occurrence. */
function grouped<T>(values: readonly T[], isFound: readonly boolean[]): (DetectionGroup & { value: T })[] {
  return [...new Set(values)].map((value) => {
    const members = isFound.filter((_, i) => values[i] === value);
    const hits = members.filter(Boolean).length;
    return { value, true: hits, missed: members.length - hits, recall: hits / members.length };
  });
}

/** Centrelines of the canonical strands of all trees of a set; shape [strands][members][points]. */
function canonicalLines(set: PlainSet, mergeMm: number): (readonly Vec3[])[][] {
  return set.trees.flatMap((tree) => linesOfCanonical(tree, canonicalTree(tree, mergeMm)));
}

/** Centrelines of each canonical strand, one per member strand, as the tree has them. */
export function linesOfCanonical(tree: PlainTree, canonical: CanonicalTree): (readonly Vec3[])[][] {
  const nodes = new Map(tree.nodes.map((node) => [node.id, node]));
  const strands = new Map(tree.strands.map((strand) => [strand.id, strand]));
  return canonical.strands.map((strand) =>
    strand.members.map((id) => {
      const member = strands.get(id)!;
      return centreline(member, nodes.get(member.from), nodes.get(member.to));
    }),
  );
}

/** Share (by length) of lines that lies within `reach` of any of the other lines; 1 for lines without length that touch. */
function shareWithin(
  lines: readonly (readonly Vec3[])[],
  others: readonly (readonly (readonly Vec3[])[])[],
  reach: number,
  step: number,
): number {
  const index = new SegmentIndex(others.flat());
  let all = 0;
  let near = 0;
  for (const line of lines) {
    const samples = resample(line, step);
    for (let k = 1; k < samples.length; k++) {
      const [p, q] = [samples[k - 1]!, samples[k]!];
      const piece = Math.hypot(q[0] - p[0], q[1] - p[1], q[2] - p[2]);
      all += piece;
      if (index.nearest([(p[0] + q[0]) / 2, (p[1] + q[1]) / 2, (p[2] + q[2]) / 2]).distance <= reach) near += piece;
    }
  }
  return all === 0 ? 0 : near / all;
}
