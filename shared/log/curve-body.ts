import type { CurveBody } from "#shared/log/records.ts";
import type { Curve } from "#shared/trees/document.ts";

/** The curve as the log writes it; NaN radii (below resolution) become null. */
export function bodyOfCurve(curve: Curve): CurveBody {
  return {
    id: curve.id,
    points: Array.from(curve.points),
    radii: Array.from(curve.radii, (r) => (Number.isNaN(r) ? null : r)),
    madeBy: curve.madeBy,
    imageFit: curve.imageFit,
  };
}

/** The curve that a log's body stands for. */
export function curveOfBody(body: CurveBody): Curve {
  return {
    id: body.id,
    points: Float64Array.from(body.points),
    radii: Float64Array.from(body.radii, (r) => r ?? Number.NaN),
    madeBy: body.madeBy,
    imageFit: body.imageFit,
  };
}
