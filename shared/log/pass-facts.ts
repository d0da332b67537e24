import type { PassHistory } from "#shared/log/history.ts";
import type { TreeDocument } from "#shared/trees/document.ts";

/** What the shelf says of a pass, counted from its history. */
export interface PassFacts {
  readonly trees: number;
  /** Ends of kind `open`: unfinished work. */
  readonly openEnds: number;
  /** Nodes, strands and cross-links marked doubtful. */
  readonly doubts: number;
  readonly edits: number;
  readonly workMs: number;
  /** UTC milliseconds of the last record. */
  readonly changed: number;
}

/** Facts of a pass as its history stands. */
export function factsOf(history: PassHistory): PassFacts {
  const { edits, workMs, changed } = history;
  return { ...documentFacts(history.document), edits, workMs, changed };
}

/** Numbers of trees, open ends and doubts in a document. */
export function documentFacts(document: TreeDocument): Pick<PassFacts, "trees" | "openEnds" | "doubts"> {
  const records = [...document.nodes.values(), ...document.strands.values(), ...document.crossLinks.values()];
  return {
    trees: document.trees.size,
    openEnds: [...document.nodes.values()].filter((node) => node.kind === "open").length,
    doubts: records.filter((record) => record.certainty === "doubtful").length,
  };
}
