import { TautlineError } from "#shared/errors.ts";
import type { StrandRequest, TracedCurve } from "#shared/tracing/strand-request.ts";
import type { CrossLinkId, Curve, StrandId } from "#shared/trees/document.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import type { Change, Operation } from "#shared/trees/operations.ts";

/** A strand or cross-link: both are drawn by pins and carry a curve. */
export type LineId = StrandId | CrossLinkId;

/** A line whose pins changed: its curve is to be solved from `from`, `via`, `to` in this direction. */
export interface LineSolve {
  readonly line: LineId;
  readonly request: StrandRequest;
}

/**
 * An edit before its curves are known. In `operation` every line named in `solves` has `curve: null`; it may be committed
 * as it is (strands without points, a finding), or with its curves by {@link withSolvedCurves}.
 */
export interface EditPlan {
  readonly operation: Operation;
  readonly solves: readonly LineSolve[];
  /** Curves that need no solving (taken in from a file, radii set by hand). */
  readonly curves: readonly Curve[];
}

/** What to hand to the history: one record of the edit, preceded by its curves. */
export interface SolvedEdit {
  readonly operation: Operation;
  readonly curves: readonly Curve[];
}

/**
 * The edit with its solved curves put in, each under a new id.
 * @param solved one per entry of `plan.solves`, in that order; null leaves the line untraced
 * @param ids the source that the plan was made with
 * @throws internal when a curve does not begin and end exactly at its line's nodes
 */
export function withSolvedCurves(plan: EditPlan, solved: readonly (TracedCurve | null)[], ids: IdSource): SolvedEdit {
  const curves: Curve[] = [...plan.curves];
  const curveOfLine = new Map<string, Curve>();
  plan.solves.forEach(({ line, request }, i) => {
    const traced = solved[i] ?? null;
    if (traced === null) return;
    expectEnds(traced, request, line);
    const { points, radii, madeBy, imageFit } = traced;
    const curve: Curve = { id: ids.next("curve"), points, radii, madeBy, imageFit };
    curves.push(curve);
    curveOfLine.set(line, curve);
  });
  const changes = plan.operation.changes.map((change): Change => {
    if (change.table !== "strand" && change.table !== "cross-link") return change;
    const curve = curveOfLine.get(change.id);
    return curve && change.to ? ({ ...change, to: { ...change.to, curve: curve.id } } as Change) : change;
  });
  return { operation: { code: plan.operation.code, changes }, curves };
}

function expectEnds(traced: TracedCurve, request: StrandRequest, line: LineId): void {
  const n = traced.radii.length;
  const last = 3 * (n - 1);
  const fits =
    n >= 2 &&
    traced.points.length === 3 * n &&
    request.from.every((value, axis) => value === traced.points[axis]) &&
    request.to.every((value, axis) => value === traced.points[last + axis]);
  if (!fits) {
    throw new TautlineError("internal", `The curve solved for ${line} does not run from node to node. The edit was not made.`, {
      what: `solved curve of ${line}`,
    });
  }
}
