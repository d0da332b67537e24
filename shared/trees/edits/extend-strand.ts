import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { crossLinksAt, strandsAt } from "#shared/trees/adjacency.ts";
import type { EndKind, LegKind, NodeId, Strand, TreeDocument } from "#shared/trees/document.ts";
import { forkIfBranching } from "#shared/trees/edits/anchor.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { isSamePlace, joinedRun, type PinRun, reversedRun, runOf, strandWithRun } from "#shared/trees/edits/pin-run.ts";
import { nodeOf, refusal } from "#shared/trees/edits/refusal.ts";
import { asKind, isLooseEnd } from "#shared/trees/edits/rewiring.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/** The next pin, and how to get there. */
export interface ExtendArgs {
  /** The end that goes on, or the node from which a new strand starts. */
  readonly node: NodeId;
  readonly to: Vec3;
  /** Pins to pass on the way, in order (an accepted proposal). */
  readonly through?: readonly Vec3[];
  /** How the new stretches are made; guided when left out. */
  readonly leg?: LegKind;
}

/**
 * Plan of one more pin. A loose end moves on and leaves a pin where it was; from an origin, fork or waypoint a new strand
 * starts. The new end is `open`.
 * @throws misuse when the pin lies on the place where the strand ends already
 */
export function extendStrand(document: TreeDocument, ids: IdSource, args: ExtendArgs): EditPlan {
  const draft = new EditDraft(document, ids);
  const branching = strandsAt(document, args.node).length > 0 && !isLooseEnd(document, nodeOf(document, args.node));
  extendInto(draft, args, "open");
  return draft.finish(branching ? "start-branch" : "extend-strand");
}

/** The step itself, on a draft. @returns the node that is the end now */
export function extendInto(draft: EditDraft, args: ExtendArgs, kind: EndKind): NodeId {
  const { document } = draft;
  const node = nodeOf(document, args.node);
  const to = roundPoint(args.to);
  const through = (args.through ?? []).map(roundPoint);
  const run: PinRun = { via: through, legs: [...through, to].map(() => args.leg ?? "guide") };
  for (const [a, b] of pairs([node.position, ...through, to])) {
    if (isSamePlace(a, b))
      throw refusal("The new pin lies on the one before it.", "pin on its neighbour", "Click farther along the string.");
  }
  if (isLooseEnd(document, node) && crossLinksAt(document, node.id).length === 0) {
    const strand = strandsAt(document, node.id)[0]!;
    draft.putStrand(continued(strand, node.id, joinedRun(outwardRun(strand, node.id), [node.position], run)));
    draft.putNode({ ...asKind(node, kind), position: to });
    return node.id;
  }
  const end = draft.ids.next("node");
  const id = draft.ids.next("strand");
  draft.putNode({ id: end, tree: node.tree, kind, position: to });
  draft.putStrand(strandWithRun({ id, tree: node.tree, from: node.id, to: end, curve: null, via: [] }, run));
  // An end that a cross-link holds stays where it is, as a place on the longer strand.
  if (isLooseEnd(document, node)) draft.putNode(asKind(node, "waypoint"));
  else forkIfBranching(draft, node.id);
  return end;
}

/** The run of a strand towards one of its nodes. */
export function outwardRun(strand: Strand, node: NodeId): PinRun {
  return strand.to === node ? runOf(strand) : reversedRun(runOf(strand));
}

/** The strand with a run that is given towards `node`. */
export function continued(strand: Strand, node: NodeId, run: PinRun): Strand {
  return strandWithRun(strand, strand.to === node ? run : reversedRun(run));
}

function pairs<T>(list: readonly T[]): (readonly [T, T])[] {
  return list.slice(1).map((item, i) => [list[i]!, item] as const);
}
