/** A ridge found in a patch: its place in sample steps from the patch's middle, and its scale-normalised response. */
export interface PatchRidge {
  u: number;
  v: number;
  /** Grey values; geometric mean of the two curvatures times sigma^2; 0 when there is no maximum. */
  response: number;
  /** The middle of the patch is the bottom of a hollow at this scale. */
  hollow: boolean;
}

/** Working memory for patches across a string. */
export interface CrossPatch {
  /** The buffer for a patch of (2 half + 1)^2 samples, v then u; its contents are overwritten by the caller. */
  reserve(half: number): Float64Array;
  /** The maximum near the middle of the reserved patch, smoothed at `sigma` sample steps; see {@link createCrossPatch}. */
  findRidge(half: number, sigma: number, bound: number, sign: 1 | -1): PatchRidge;
}

const ROUNDS = 5;

/**
 * Finds the maximum of a patch smoothed by a Gaussian, by Newton's method from the middle: gradient and curvatures come
 * from the Gaussian's own derivatives at the place reached, so that no grid limits it. Steps beyond `bound` sample
 * steps from the middle are cut to it.
 * @source Newton's method; Gaussian derivatives as in Lindeberg 1998.
 */
export function createCrossPatch(): CrossPatch {
  let values = new Float64Array(0);
  let tables = new Float64Array(0);
  return {
    reserve(half) {
      const count = (2 * half + 1) ** 2;
      if (values.length < count) values = new Float64Array(count);
      return values;
    },
    findRidge(half, sigma, bound, sign) {
      const side = 2 * half + 1;
      if (tables.length < 6 * side) tables = new Float64Array(6 * side);
      // Values are taken from the patch's own mean, so that the cut-off tails of the kernels weigh nothing.
      let mean = 0;
      for (let i = 0; i < side * side; i++) mean += values[i]!;
      mean /= side * side;
      let u = 0;
      let v = 0;
      let response = 0;
      let hollow = false;
      for (let round = 0; round < ROUNDS; round++) {
        gaussianTables(tables, 0, side, half, u, sigma);
        gaussianTables(tables, 3 * side, side, half, v, sigma);
        let gu = 0;
        let gv = 0;
        let huu = 0;
        let huv = 0;
        let hvv = 0;
        for (let j = 0; j < side; j++) {
          let s0 = 0;
          let s1 = 0;
          let s2 = 0;
          for (let i = 0; i < side; i++) {
            const value = values[j * side + i]! - mean;
            s0 += tables[i]! * value;
            s1 += tables[side + i]! * value;
            s2 += tables[2 * side + i]! * value;
          }
          const w0 = tables[3 * side + j]!;
          const w1 = tables[4 * side + j]!;
          const w2 = tables[5 * side + j]!;
          gu += w0 * s1;
          gv += w1 * s0;
          huu += w0 * s2;
          huv += w1 * s1;
          hvv += w2 * s0;
        }
        gu *= sign;
        gv *= sign;
        huu *= -sign;
        hvv *= -sign;
        huv *= -sign;
        // Here h is minus the Hessian: both curvatures positive at a maximum.
        const determinant = huu * hvv - huv * huv;
        if (round === 0) hollow = determinant > 0 && huu + hvv < 0;
        const convex = huu + hvv > 0 && determinant > 0;
        response = convex ? sigma * sigma * Math.sqrt(determinant) : 0;
        let du: number;
        let dv: number;
        if (convex) {
          du = (hvv * gu - huv * gv) / determinant;
          dv = (huu * gv - huv * gu) / determinant;
        } else {
          // No maximum here: uphill by half a sigma.
          const slope = Math.hypot(gu, gv);
          if (slope === 0) break;
          du = (gu / slope) * 0.5 * sigma;
          dv = (gv / slope) * 0.5 * sigma;
        }
        const stride = Math.hypot(du, dv);
        const most = 0.7 * sigma;
        if (stride > most) {
          du *= most / stride;
          dv *= most / stride;
        }
        u += du;
        v += dv;
        const far = Math.hypot(u, v);
        if (far > bound) {
          u *= bound / far;
          v *= bound / far;
        }
        if (stride < 1e-3) break;
      }
      return { u, v, response, hollow };
    },
  };
}

/** Gaussian about `at` and its first two derivatives with respect to the place, for the samples -half to half. */
function gaussianTables(tables: Float64Array, from: number, side: number, half: number, at: number, sigma: number): void {
  const s2 = sigma * sigma;
  const norm = 1 / (Math.sqrt(2 * Math.PI) * sigma);
  for (let i = 0; i < side; i++) {
    const d = i - half - at;
    const g = norm * Math.exp((-d * d) / (2 * s2));
    tables[from + i] = g;
    tables[from + side + i] = (g * d) / s2;
    tables[from + 2 * side + i] = (g * (d * d - s2)) / (s2 * s2);
  }
}
