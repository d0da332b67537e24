import type { PassKeeper } from "#renderer/editor/session/pass-keeper.ts";
import type { Sticky } from "#renderer/editor/session/sticky-labels.ts";
import type { StrandSolver } from "#renderer/editor/session/strand-solver.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import type { AskSnap } from "#renderer/editor/tracing/snapper.ts";
import { choose } from "#renderer/editor/tracing/snapper.ts";
import type { UnderWay } from "#renderer/editor/tracing/under-way.ts";
import { type PointMm, roundPoint } from "#shared/geometry/types.ts";
import { apply, squash } from "#shared/trees/apply.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { type EditPlan, withSolvedCurves } from "#shared/trees/edits/edit-plan.ts";
import type { IdSource } from "#shared/trees/ids.ts";

export type MakePlan = (document: TreeDocument, ids: IdSource) => EditPlan;

/** What carrying out an intent acts on. */
export interface Stage {
  readonly keeper: PassKeeper;
  readonly solver: StrandSolver;
  readonly snap: AskSnap;
  readonly sticky: () => Sticky;
  underWay: UnderWay;
}

/** The plan of two edits in a row as one edit: one step of undo. Lines solved twice are solved as the second plan says. */
export function inOne(first: MakePlan, second: MakePlan): MakePlan {
  return (document, ids) => {
    const a = first(document, ids);
    const b = second(apply(document, a.operation).document, ids);
    const again = new Set(b.solves.map((solve) => solve.line));
    return {
      operation: { code: b.operation.code, changes: squash(a.operation, b.operation).changes },
      solves: [...a.solves.filter((solve) => !again.has(solve.line)), ...b.solves],
      curves: [...a.curves, ...b.curves],
    };
  };
}

/** Makes an edit: plans it, has its curves solved, and hands one record to the history. The document after it is returned. */
export async function makeEdit(stage: Stage, label: string, plan: MakePlan, signal: AbortSignal): Promise<EditPlan> {
  const { keeper, solver } = stage;
  const ids = keeper.ids();
  const made = plan(keeper.document, ids);
  const traced = await solver.solve(
    made.solves.map((solve) => solve.request),
    signal,
  );
  signal.throwIfAborted();
  const edit = withSolvedCurves(made, traced, ids);
  await keeper.commit(edit.operation, label, edit.curves);
  return made;
}

/** The place meant, snapped now when it was not yet. */
export async function settlePlace(stage: Stage, place: IntentPlace): Promise<PointMm> {
  if ("point" in place) return roundPoint(place.point);
  if (!place.aim.snap) return roundPoint(place.aim.at);
  const answer = await stage.snap(place.aim);
  return choose(place.aim, answer?.candidates ?? []).point;
}
