import { type PointMm, pointMm } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { FollowProposal, ProposedNode, ProposedStrand } from "#shared/tracing/follow/proposal.ts";

/** A place along a proposed strand: its id and the number of one of its points. */
export interface PlaceOnProposal {
  readonly strand: string;
  readonly point: number;
}

/** Id of the node that a cut makes. */
const CUT_NODE = "cut";

/** The strands of a proposal that hang together with the clicked one once those left out are gone; none without that one. */
export function keptStrands(
  proposal: Pick<FollowProposal, "strands" | "clicked">,
  leftOut: ReadonlySet<string>,
): ReadonlySet<string> {
  const clicked = proposal.strands.find(({ id }) => id === proposal.clicked.strand);
  if (clicked === undefined) return new Set();
  const kept = new Set([clicked.id]);
  const reached = new Set([clicked.from, clicked.to]);
  for (let grew = true; grew; ) {
    grew = false;
    for (const { id, from, to } of proposal.strands) {
      if (kept.has(id) || leftOut.has(id) || !(reached.has(from) || reached.has(to))) continue;
      kept.add(id);
      reached.add(from).add(to);
      grew = true;
    }
  }
  return kept;
}

/**
 * The part of a proposal that a person takes: without the strands left out, what hangs on them, and what lies beyond a cut as
 * seen from the click. Where the cut is, the string is open; where the origin was left out, the node nearest to it takes its
 * place, unseen. A cut strand has no points: it is solved from its pins, as one traced so far would be.
 */
export function partOfProposal(
  proposal: FollowProposal,
  leftOut: ReadonlySet<string>,
  cut: PlaceOnProposal | null = null,
): FollowProposal {
  const whole = cut === null ? proposal : withCut(proposal, leftOut, cut);
  const kept = keptStrands(whole, leftOut);
  const strands = whole.strands.filter(({ id }) => kept.has(id));
  const degrees = new Map<string, number>();
  for (const { from, to } of strands) for (const id of [from, to]) degrees.set(id, (degrees.get(id) ?? 0) + 1);
  const root = degrees.has(whole.root) ? whole.root : towardsRoot(whole, strands);
  const nodes = whole.nodes
    .filter(({ id }) => degrees.has(id))
    .map((node): ProposedNode => {
      if (node.id === root && node.kind !== "origin") {
        return { ...node, kind: "origin", site: "unseen" };
      }
      if (node.kind !== "fork" || degrees.get(node.id)! > 2) return node;
      return { ...node, kind: degrees.get(node.id) === 2 ? "waypoint" : "open" };
    });
  return { ...whole, nodes, strands, root, lengthMm: strands.reduce((sum, strand) => sum + lengthOf(strand), 0) };
}

/** The node of the kept strands that comes first on the way from the old origin. */
function towardsRoot(proposal: FollowProposal, kept: readonly ProposedStrand[]): string {
  const inKept = new Set(kept.flatMap(({ from, to }) => [from, to]));
  const seen = new Set([proposal.root]);
  const queue = [proposal.root];
  for (const node of queue) {
    if (inKept.has(node)) return node;
    for (const { from, to } of proposal.strands) {
      const next = from === node ? to : to === node ? from : null;
      if (next === null || seen.has(next)) continue;
      seen.add(next);
      queue.push(next);
    }
  }
  // A cut strand is in two: what lies beyond it is not joined to the origin any more.
  return inKept.has(CUT_NODE) ? CUT_NODE : kept[0]!.from;
}

/** The proposal with a strand shortened to the side of the click. */
function withCut(proposal: FollowProposal, leftOut: ReadonlySet<string>, { strand: id, point }: PlaceOnProposal): FollowProposal {
  const strand = proposal.strands.find((one) => one.id === id);
  if (strand === undefined) return proposal;
  const last = strand.points.length / 3 - 1;
  const isClicked = id === proposal.clicked.strand;
  if (point <= 0 || point >= last || (isClicked && point === proposal.clicked.point)) return proposal;
  const others = keptStrands(proposal, new Set([...leftOut, id]));
  const isFromSide = isClicked
    ? proposal.clicked.point < point
    : proposal.strands.some((one) => others.has(one.id) && (one.from === strand.from || one.to === strand.from));
  const place = pointOf(strand, point);
  const shorter: ProposedStrand = {
    ...strand,
    ...(isFromSide ? { to: CUT_NODE } : { from: CUT_NODE }),
    via: strand.via.filter((pin) => (isFromSide ? nearestPoint(strand, pin) < point : nearestPoint(strand, pin) > point)),
    points: [],
    radii: [],
    doubtful: [],
  };
  const node: ProposedNode = { id: CUT_NODE, kind: "open", position: place, certainty: "sure", reason: null, meets: null };
  return {
    ...proposal,
    nodes: [...proposal.nodes, node],
    strands: proposal.strands.map((one) => (one.id === id ? shorter : one)),
  };
}

function pointOf({ points }: ProposedStrand, i: number): PointMm {
  return pointMm(points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!);
}

/** Number of the strand's point that is nearest to a place; the first one when several are. */
export function nearestPoint(strand: ProposedStrand, place: PointMm): number {
  let best = 0;
  for (let i = 1; i < strand.points.length / 3; i++)
    if (distance(pointOf(strand, i), place) < distance(pointOf(strand, best), place)) best = i;
  return best;
}

function lengthOf(strand: ProposedStrand): number {
  let sum = 0;
  for (let i = 1; i < strand.points.length / 3; i++) sum += distance(pointOf(strand, i - 1), pointOf(strand, i));
  return sum;
}
