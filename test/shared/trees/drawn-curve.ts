import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { mix } from "#shared/geometry/vec3.ts";
import type { StrandRequest, TracedCurve } from "#shared/tracing/strand-request.ts";
import { type EditPlan, type SolvedEdit, withSolvedCurves } from "#shared/trees/edits/edit-plan.ts";
import type { IdSource } from "#shared/trees/ids.ts";

/**
 * Stands in for the tracer in tests of edits: through every pin, bulging sideways between them, so that a curve is not its
 * pins. Depends on the request alone.
 */
export function drawnCurve(request: StrandRequest): TracedCurve {
  const pins: Vec3[] = [request.from, ...request.via, request.to];
  const points: Vec3[] = [pins[0]!];
  for (let k = 1; k < pins.length; k++) {
    const straight = request.legs?.[k - 1] === "straight";
    for (let i = 1; i <= 8; i++) {
      const [x, y, z] = mix(pins[k - 1]!, pins[k]!, i / 8);
      points.push(i === 8 ? pins[k]! : roundPoint([x, y, z + (straight ? 0 : 0.2 * Math.sin((Math.PI * i) / 8))]));
    }
  }
  const n = points.length;
  return {
    points: Float64Array.from(points.flat()),
    radii: new Float64Array(n).fill(0.25),
    madeBy: [[0, n - 1, "guide"]],
    imageFit: 0.8,
    followed: true,
  };
}

/** The plan with every line drawn by {@link drawnCurve}. */
export function drawn(plan: EditPlan, ids: IdSource): SolvedEdit {
  return withSolvedCurves(
    plan,
    plan.solves.map(({ request }) => drawnCurve(request)),
    ids,
  );
}
