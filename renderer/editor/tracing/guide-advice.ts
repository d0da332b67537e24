import { mmText, treeName } from "#renderer/editor/session/words.ts";
import type { UnderWay } from "#renderer/editor/tracing/under-way.ts";
import type { GuideWarning } from "#shared/checks/guide-warnings.ts";
import { type PointMm, roundPoint } from "#shared/geometry/types.ts";
import type { CrossLinkId, NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { isLooseEnd } from "#shared/trees/edits/rewiring.ts";

/** A fork that the guide suggests, and what taking it would do. */
export type ForkProposal =
  /** The branch under way starts at this place instead. */
  | { readonly kind: "branch"; readonly strand: StrandId; readonly at: PointMm }
  /** The end under way is joined to this place. */
  | { readonly kind: "join"; readonly end: NodeId; readonly strand: StrandId; readonly at: PointMm };

/** One warning as the desk says it: "runs along ALPM-03 s12 for 1.2 mm". */
export function adviceWords(document: TreeDocument, warning: GuideWarning): string {
  const string = "strand" in warning ? lineWords(document, warning.strand) : "";
  switch (warning.kind) {
    case "rides":
      return `runs along ${string} for ${mmText(warning.lengthMm)}`;
    case "leaves":
      return `leaves ${string} after ${mmText(warning.lengthMm)}`;
    case "meets":
      return `meets ${string}`;
    case "jumps":
      return `may jump to another string (${mmText(warning.lengthMm)} without image)`;
    case "tails":
      return `crosses ${string}: tails may be exchanged`;
  }
}

function lineWords(document: TreeDocument, id: string): string {
  const strand = document.strands.get(id as StrandId);
  if (strand !== undefined) return `${treeName(document, strand.tree)} ${id}`;
  return document.crossLinks.has(id as CrossLinkId) ? `cross-link ${id}` : id;
}

/**
 * The first fork that the guide suggests: where it leaves the string that it began on (before the first pin of a branch), or
 * where a strand with pins arrives at a string of another tree. Null when it suggests none.
 */
export function forkProposal(document: TreeDocument, underWay: UnderWay, warnings: readonly GuideWarning[]): ForkProposal | null {
  for (const warning of warnings) {
    if (warning.kind !== "leaves" && warning.kind !== "meets") continue;
    const strand = document.strands.get(warning.strand as StrandId);
    if (strand === undefined) continue;
    const at = roundPoint(warning.at);
    const tip = underWay.kind === "strand" ? document.nodes.get(underWay.tip) : undefined;
    const hasPins = tip !== undefined && isLooseEnd(document, tip);
    if (warning.kind === "leaves" && (underWay.kind === "branch" || (tip !== undefined && !hasPins)))
      return { kind: "branch", strand: strand.id, at };
    if (warning.kind === "meets" && hasPins && tip.tree !== strand.tree)
      return { kind: "join", end: tip.id, strand: strand.id, at };
  }
  return null;
}
