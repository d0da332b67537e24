import type { Ticket } from "#shared/api/ticket.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";

/**
 * Follow from a window: `openFollow` with the clicked place gives a session; `moreFollow` with it, again and again, lets the run go
 * on for a fraction of a second and answers with what is known so far, until `done`; `closeFollow` stops it at any time
 * (asking no more is enough, a session that nobody asks for ends by itself). The end result does not depend on how often
 * was asked. A newer follow of the same window takes the place of an older one, whose next `moreFollow` is answered `not-found`.
 *
 * To accept: `partOfProposal` (`#shared/tracing/follow/part-of-proposal.ts`) leaves out what the person does not want, and
 * `proposalDocument` (`accept-proposal.ts` beside it) gives a document for `takeInTrees`; one operation, one undo.
 */
export interface FollowOpenRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  /** The clicked place, in the scan; best a snapped one. */
  readonly at: PointMm;
  readonly parameters: TraceParameters;
  /** Centrelines of the strands traced already, each flat xyz, millimetres: the run stops where it meets one. */
  readonly traced?: readonly (readonly number[])[];
}

export interface FollowMoreRequest {
  readonly ticket: Ticket;
  readonly session: string;
}

export interface FollowAnswer {
  readonly done: boolean;
  /** Stretches followed so far, each flat xyz, millimetres; rough while growing. */
  readonly growing: readonly (readonly number[])[];
  /** Their length so far, millimetres. */
  readonly lengthMm: number;
  /** Null until done; and when done without a string near the clicked place. */
  readonly proposal: FollowProposal | null;
}
