/** A block of values about an edge: `nu` along the profile, `nv` x `nw` beside it, shape [nw, nv, nu]. All three are odd. */
export interface EdgeBlock {
  readonly values: Float64Array;
  readonly nu: number;
  readonly nv: number;
  readonly nw: number;
  /** Voxel spacing along u, v, w, millimetres. */
  readonly spacing: readonly [number, number, number];
}

/** A plane edge between two levels, blurred by a Gaussian. */
export interface EdgeFit {
  /** Standard deviation across the edge, millimetres. */
  readonly sigmaMm: number;
  /** Height of the step, grey values; negative when it falls along u. */
  readonly step: number;
  /** Slopes of the edge against the block, 0 when it is square to u. */
  readonly tilt: readonly [number, number];
  /** Greatest distance between fit and values, averaged over each position along the normal to u; share of the step's height. */
  readonly misfit: number;
  /** Standard deviation of such an average by noise alone; share of the step's height. */
  readonly misfitByNoise: number;
}

const PARAMETERS = 6;
const STEPS = 12;

/**
 * Fits a + A Phi(distance / sigma) to a block, the distance taken from a plane near the block's middle, by damped least squares
 * over level, height, place, two tilts and sigma. Null when it does not settle.
 * @source Levenberg 1944, Marquardt 1963 (method); the model is own derivation.
 */
export function fitEdge(block: EdgeBlock): EdgeFit | null {
  const { values, nu, nv, nw, spacing } = block;
  const p = startOf(block);
  const trial = new Float64Array(PARAMETERS);
  const normal = new Float64Array(PARAMETERS * PARAMETERS);
  const right = new Float64Array(PARAMETERS);
  let cost = sumOfSquares(block, p, normal, right);
  let damping = 1e-3;
  for (let step = 0; step < STEPS; step++) {
    const change = solveDamped(normal, right, damping);
    if (!change) return null;
    for (let k = 0; k < PARAMETERS; k++) trial[k] = p[k]! + change[k]!;
    const next = sumOfSquares(block, trial, null, null);
    if (next < cost) {
      p.set(trial);
      const gain = (cost - next) / cost;
      cost = sumOfSquares(block, p, normal, right);
      damping /= 10;
      if (gain < 1e-4) break;
    } else damping *= 10;
    if (damping > 1e6) break;
  }
  if (!p.every(Number.isFinite) || p[1] === 0) return null;
  const offsets = new Float64Array(nu);
  const slope = Math.sqrt(1 + p[3]! * p[3]! + p[4]! * p[4]!);
  const sigma = Math.exp(p[5]!);
  const beside = nv * nw;
  let squares = 0;
  for (let w = 0, at = 0; w < nw; w++)
    for (let v = 0; v < nv; v++)
      for (let u = 0; u < nu; u++, at++) {
        const t = distance(u, v, w, block, p) / slope / sigma;
        const residual = values[at]! - p[0]! - p[1]! * phi(t, Math.exp(-0.5 * t * t));
        offsets[u] = offsets[u]! + residual / beside;
        squares += residual * residual;
      }
  let misfit = 0;
  for (const offset of offsets) {
    misfit = Math.max(misfit, Math.abs(offset));
    squares -= beside * offset * offset;
  }
  const height = Math.abs(p[1]!);
  const noise = Math.sqrt(Math.max(0, squares) / (nu * (beside - 1)));
  const reach = ((nu - 1) / 2) * spacing[0];
  if (Math.abs(p[2]!) > reach / 2) return null;
  return {
    sigmaMm: sigma,
    step: p[1]!,
    tilt: [p[3]!, p[4]!],
    misfit: misfit / height,
    misfitByNoise: noise / Math.sqrt(beside) / height,
  };
}

/** Parameters: level, height, place along u (mm from the middle), tilt along v, tilt along w, log of sigma (mm). */
function startOf({ values, nu, nv, nw, spacing }: EdgeBlock): Float64Array {
  const mean = (u: number) => {
    let sum = 0;
    for (let k = 0; k < nv * nw; k++) sum += values[k * nu + u]!;
    return sum / (nv * nw);
  };
  const low = (mean(0) + mean(1)) / 2;
  const high = (mean(nu - 1) + mean(nu - 2)) / 2;
  return Float64Array.of(low, high - low, 0, 0, 0, Math.log(spacing[0]));
}

function distance(u: number, v: number, w: number, block: EdgeBlock, p: Float64Array): number {
  const { nu, nv, nw, spacing } = block;
  const x = (u - (nu - 1) / 2) * spacing[0] - p[2]!;
  return x + p[3]! * (v - (nv - 1) / 2) * spacing[1] + p[4]! * (w - (nw - 1) / 2) * spacing[2];
}

/** Sum of squared residuals; fills the normal equations where asked for. */
function sumOfSquares(block: EdgeBlock, p: Float64Array, normal: Float64Array | null, right: Float64Array | null): number {
  const { values, nu, nv, nw, spacing } = block;
  normal?.fill(0);
  right?.fill(0);
  const sigma = Math.exp(p[5]!);
  const square = 1 + p[3]! * p[3]! + p[4]! * p[4]!;
  const scale = 1 / (Math.sqrt(square) * sigma);
  const [level, step, tiltV, tiltW] = [p[0]!, p[1]!, p[3]!, p[4]!];
  const row = new Float64Array(PARAMETERS);
  row[0] = 1;
  let sum = 0;
  for (let w = 0, at = 0; w < nw; w++)
    for (let v = 0; v < nv; v++) {
      const y = (v - (nv - 1) / 2) * spacing[1];
      const z = (w - (nw - 1) / 2) * spacing[2];
      const beside = (tiltV * y + tiltW * z - p[2]!) * scale;
      for (let u = 0; u < nu; u++, at++) {
        const t = (u - (nu - 1) / 2) * spacing[0] * scale + beside;
        const bell = Math.exp(-0.5 * t * t);
        const rise = phi(t, bell);
        const residual = values[at]! - level - step * rise;
        sum += residual * residual;
        if (!normal || !right) continue;
        const density = step * 0.3989422804014327 * bell;
        row[1] = rise;
        row[2] = -density * scale;
        row[3] = density * (y * scale - (t * tiltV) / square);
        row[4] = density * (z * scale - (t * tiltW) / square);
        row[5] = -density * t;
        for (let i = 0; i < PARAMETERS; i++) {
          const r = row[i]!;
          right[i] = right[i]! + r * residual;
          for (let j = 0; j <= i; j++) normal[i * PARAMETERS + j] = normal[i * PARAMETERS + j]! + r * row[j]!;
        }
      }
    }
  return sum;
}

/** Solution of the damped normal equations by Cholesky's method; null when they are singular. */
function solveDamped(normal: Float64Array, right: Float64Array, damping: number): Float64Array | null {
  const n = PARAMETERS;
  const l = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j <= i; j++) {
      let sum = normal[i * n + j]! * (i === j ? 1 + damping : 1);
      for (let k = 0; k < j; k++) sum -= l[i * n + k]! * l[j * n + k]!;
      if (i === j) {
        if (!(sum > 0)) return null;
        l[i * n + i] = Math.sqrt(sum);
      } else l[i * n + j] = sum / l[j * n + j]!;
    }
  const x = Float64Array.from(right);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < i; k++) x[i]! -= l[i * n + k]! * x[k]!;
    x[i]! /= l[i * n + i]!;
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) x[i]! -= l[k * n + i]! * x[k]!;
    x[i]! /= l[i * n + i]!;
  }
  return x;
}

/**
 * The normal distribution function; `bell` is exp(-t^2 / 2), which the callers have.
 * @source Abramowitz & Stegun 1964, 7.1.26 (error below 1.5e-7)
 */
function phi(t: number, bell: number): number {
  const x = Math.abs(t) * Math.SQRT1_2;
  const k = 1 / (1 + 0.3275911 * x);
  const tail = k * (0.254829592 + k * (-0.284496736 + k * (1.421413741 + k * (-1.453152027 + k * 1.061405429)))) * bell;
  return t >= 0 ? 1 - tail / 2 : tail / 2;
}
