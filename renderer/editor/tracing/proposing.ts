import type { ReadonlySignal } from "@preact/signals";
import type { Intent } from "#renderer/editor/session/intent.ts";
import type { Meeting } from "#renderer/editor/session/take-proposal.ts";
import { Follower, type Following, type FollowSource, type TracedLine } from "#renderer/editor/tracing/follower.ts";
import { nearestSeen, type Sight } from "#renderer/editor/tracing/passing.ts";
import { tracedStrings } from "#renderer/editor/tracing/traced-strings.ts";
import { TautlineError } from "#shared/errors.ts";
import { resample } from "#shared/geometry/polyline.ts";
import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";
import { nearestPoint, type PlaceOnProposal, partOfProposal } from "#shared/tracing/follow/part-of-proposal.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import type { StrandId, TreeDocument } from "#shared/trees/document.ts";

/** Traced lines are sent in steps of so much, millimetres: a run that meets one comes much nearer. */
const TRACED_STEP_MM = 0.3;

/** What proposing needs of the editor. */
export interface ProposingPlaces {
  readonly source: FollowSource;
  readonly document: () => TreeDocument;
  readonly take: (intent: Intent) => void;
  readonly failed: (error: unknown) => void;
}

/** Proposals of whole strings from one place, taken whole, in part, or up to a place. Nothing is edited until one is taken. */
export class Proposing {
  private readonly follower: Follower;

  constructor(private readonly places: ProposingPlaces) {
    this.follower = new Follower(places.source, places.failed);
  }

  get following(): ReadonlySignal<Following> {
    return this.follower.following;
  }
  get lines(): ReadonlySignal<readonly ProposedLine[]> {
    return this.follower.lines;
  }

  /** Follows the string through a place; says so when there is none. */
  async start(at: PointMm): Promise<void> {
    const ended = await this.follower.start(at, tracedLines(this.places.document()));
    if (ended !== "none") return;
    this.places.failed(
      new TautlineError(
        "misuse",
        "No string was found through this place. Point at the middle of a string and propose again (F).",
        {
          what: "no string to follow",
        },
      ),
    );
  }

  /** The proposed strand that is seen at a place, and the number of its nearest point. */
  placeSeen(sight: Sight): PlaceOnProposal | null {
    const following = this.following.value;
    if (following.kind !== "ready") return null;
    const { strands } = following.proposal;
    const seen = nearestSeen(
      strands.map((strand) => ({ id: strand.id, points: vectorsOf(strand.points) })),
      sight,
    );
    const strand = strands.find(({ id }) => id === seen?.id);
    return seen === null || strand === undefined ? null : { strand: strand.id, point: nearestPoint(strand, seen.near) };
  }

  toggle(strand: string): void {
    this.follower.toggle(strand);
  }

  /** Takes what is kept, up to a place where one is given; one edit. */
  take(cut: PlaceOnProposal | null = null): void {
    const following = this.following.value;
    if (following.kind !== "ready") return;
    const { proposal, leftOut, traced } = following;
    const part = partOfProposal(proposal, leftOut, cut);
    this.follower.stop();
    this.places.take({ do: "take-proposal", proposal: part, meeting: meetingOf(part, traced, this.places.document()) });
  }

  putAway(): void {
    this.follower.stop();
  }
}

function tracedLines(document: TreeDocument): TracedLine[] {
  return tracedStrings(document, null)
    .filter(({ strand, line }) => strand.startsWith("s") && line.length > 1)
    .map(({ strand, line }) => ({
      id: strand,
      points: resample(line, TRACED_STEP_MM).flatMap((point) => point.map((mm) => Math.round(mm * 1e3) / 1e3)),
    }));
}

/** The first place where a proposal meets a string that is still there. */
function meetingOf(part: FollowProposal, traced: readonly string[], document: TreeDocument): Meeting | null {
  for (const { id, meets, position } of part.nodes) {
    const strand = meets === null ? undefined : (traced[meets] as StrandId | undefined);
    if (strand !== undefined && document.strands.has(strand)) return { node: id, to: { strand, near: position } };
  }
  return null;
}

function vectorsOf(flat: readonly number[]): Vec3[] {
  return Array.from({ length: flat.length / 3 }, (_, i) => pointMm(flat[3 * i]!, flat[3 * i + 1]!, flat[3 * i + 2]!));
}
