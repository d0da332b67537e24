import type { TreeDocument } from "#shared/trees/document.ts";

/** What the head line counts. */
export interface Counts {
  readonly trees: number;
  readonly open: number;
  readonly doubts: number;
}

/** Trees, open ends, and items marked doubtful. */
export function countsOf(document: TreeDocument): Counts {
  const nodes = [...document.nodes.values()];
  const marked = [...nodes, ...document.strands.values(), ...document.crossLinks.values()];
  return {
    trees: document.trees.size,
    open: nodes.filter((node) => node.kind === "open").length,
    doubts: marked.filter((item) => item.certainty === "doubtful").length,
  };
}
