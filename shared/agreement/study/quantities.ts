import { commonPaths } from "#shared/agreement/common-paths.ts";
import type { SpecimenItems, StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";

/** One item's value of one quantity by each of the compared passes; null = not marked, or cannot be given. */
export interface QuantityRow {
  readonly item: string;
  readonly values: readonly (number | null)[];
}

/** A quantity on the items of one specimen. */
export interface QuantityRows {
  readonly quantity: string;
  readonly unit: string;
  /** What the items are: nodes, or paths between nodes that all compared passes have. */
  readonly on: "nodes" | "common paths" | "specimen";
  readonly rows: readonly QuantityRow[];
  /** Share of each compared pass's length on common paths; null for other quantities. */
  readonly coverage: readonly (number | null)[] | null;
}

/** Totals of a specimen, which misses enter; one row each. */
export function totalRows(specimen: StudySpecimen, compared: readonly number[]): QuantityRows[] {
  const count = (pass: StudyPass, kind: string) => pass.measures.nodes.filter((node) => node.kind === kind).length;
  const row = (quantity: string, unit: string, value: (pass: StudyPass) => number): QuantityRows => ({
    quantity,
    unit,
    on: "specimen",
    rows: [{ item: "total", values: compared.map((p) => value(specimen.passes[p]!)) }],
    coverage: null,
  });
  return [
    row("origins", "count", (pass) => count(pass, "origin")),
    row("insertions", "count", (pass) => count(pass, "insertion")),
    row("total length", "mm", (pass) => pass.measures.totals.length),
  ];
}

/** Lengths, radii and angles on matched items. @param compared indices of the specimen's passes. */
export function matchedRows(specimen: StudySpecimen, items: SpecimenItems, compared: readonly number[]): QuantityRows[] {
  const canonical = specimen.passes.map((pass) => pass.canonical);
  const { paths, coverage } = commonPaths(canonical, items.nodes, compared);
  const onPaths = (quantity: string, unit: string, value: (p: number, strands: readonly number[]) => number | null) => ({
    quantity,
    unit,
    on: "common paths" as const,
    rows: paths.map((path) => ({
      item: `path ${path.ends[0]}-${path.ends[1]}`,
      values: path.strands.map((strands, c) => value(compared[c]!, strands)),
    })),
    coverage,
  });
  const nodes = new Map(specimen.passes.flatMap((pass, p) => pass.measures.nodes.map((node) => [`${p} ${node.id}`, node])));
  const onNodes = (
    quantity: string,
    unit: string,
    type: "fork" | "end",
    key: "pathLength" | "straightnessAngle" | "branchingAngle",
  ) => ({
    quantity,
    unit,
    on: "nodes" as const,
    rows: items.nodes.items.flatMap((item, k) => {
      const marked = compared.filter((p) => item.members[p]! >= 0);
      if (marked.length < 2 || canonical[marked[0]!]!.nodes[item.members[marked[0]!]!]!.type !== type) return [];
      const values = compared.map((p) => {
        const node = item.members[p]! < 0 ? undefined : canonical[p]!.nodes[item.members[p]!]!;
        // Forks drawn as one have no angles of their own.
        return node && node.members.length === 1 ? (nodes.get(`${p} ${node.id}`)?.[key] ?? null) : null;
      });
      return [{ item: `node ${k}`, values }];
    }),
    coverage: null,
  });
  return [
    onPaths("strand length", "mm", (p, strands) => strands.reduce((sum, k) => sum + canonical[p]!.strands[k]!.length, 0)),
    onNodes("path length", "mm", "end", "pathLength"),
    onPaths("mean radius", "mm", (p, strands) => meanRadius(specimen.passes[p]!, strands)),
    onNodes("straightness angle", "degrees", "fork", "straightnessAngle"),
    onNodes("branching angle", "degrees", "fork", "branchingAngle"),
  ];
}

/** Mean radius along canonical strands, weighted by the length of those that have one, millimetres; null where none has. @param strands indices of the pass's strands */
export function meanRadius(pass: StudyPass, strands: readonly number[]): number | null {
  const wanted = new Set(
    strands.flatMap((k) => {
      const { tree, strand } = pass.canonical.strands[k]!;
      return pass.canonical.trees[tree]!.strands[strand]!.members;
    }),
  );
  let [sum, weight] = [0, 0];
  for (const { id, length, meanRadius: radius } of pass.measures.strands) {
    if (!wanted.has(id) || radius === null) continue;
    sum += length * radius;
    weight += length;
  }
  return weight > 0 ? sum / weight : null;
}
