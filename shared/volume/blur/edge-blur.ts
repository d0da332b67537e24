import { type EdgeBlock, fitEdge } from "#shared/volume/blur/fit-edge.ts";
import type { StoredArray } from "#shared/volume/dtype.ts";
import { quantile } from "#shared/volume/value-survey.ts";

/** A Gaussian's full width at half maximum over its standard deviation. */
const FWHM_PER_SIGMA = 2 * Math.sqrt(2 * Math.LN2);
/** Slices looked at, evenly spread. */
const SLICES = 20;
/** Edges fitted per slice and direction. */
const EDGES = 20;
/** Half lengths of the profile, voxels: the longest first, since thin sheets leave room for the shorter ones only. */
const REACHES = [7, 5, 4];
const BESIDE = 2;
/** Least height of a step, share of the slice's contrast. */
const LEAST_STEP = 0.3;
/** Greatest systematic distance from the model, share of the step; more only where noise alone explains it. */
const MOST_MISFIT = 0.06;
const MOST_TILT = 0.7;
/** Fewer good edges than this tell nothing. */
const LEAST_EDGES = 40;
/** Quartile distance over median above which the edges do not agree. */
const MOST_SPREAD = 0.6;

/**
 * Estimates a scan's blur from its edges while its slices pass: in some slices, steep places along rows and columns are fitted by
 * a plane edge between two levels, tilted freely and blurred by a Gaussian. A voxel's own size is part of the result. Keeps three slices.
 * @source own derivation: edge method with free tilt; the median over edges that the model describes.
 */
export class EdgeBlurSurvey {
  readonly #size: readonly [number, number, number];
  readonly #spacing: readonly [number, number, number];
  readonly #middles: ReadonlySet<number>;
  #kept: { z: number; plane: StoredArray }[] = [];
  readonly #sigmas: number[] = [];

  /** @param size voxels, order xyz. @param spacing millimetres, order xyz. */
  constructor(size: readonly [number, number, number], spacing: readonly [number, number, number]) {
    this.#size = size;
    this.#spacing = spacing;
    const count = Math.min(SLICES, Math.floor((size[2] - 2) / 3));
    this.#middles = new Set(
      Array.from({ length: Math.max(0, count) }, (_, k) => 1 + Math.floor(((k + 0.5) * (size[2] - 2)) / count)),
    );
  }

  /** Takes slice `z`, shape [ny, nx]; slices come in order. Borrowed: copied where needed. */
  add(z: number, plane: StoredArray): void {
    const near = [z - 1, z, z + 1].some((middle) => this.#middles.has(middle));
    if (!near) return;
    // Slices no longer needed are written over: at wide planes garbage would weigh more than all else.
    const spare = this.#kept.find((slice) => slice.z < z - 2)?.plane;
    spare?.set(plane);
    this.#kept = [...this.#kept.filter((slice) => slice.z >= z - 2), { z, plane: spare ?? plane.slice() }];
    const [a, b, c] = this.#kept;
    if (!a || !b || !c || a.z !== z - 2 || b.z !== z - 1 || !this.#middles.has(z - 1)) return;
    this.#look([a.plane, b.plane, c.plane]);
  }

  /** Full width at half maximum, millimetres; null when too few edges were found or they do not agree. */
  estimate(): number | null {
    const sorted = Float64Array.from(this.#sigmas).sort();
    if (sorted.length < LEAST_EDGES) return null;
    const median = quantile(sorted, 0.5);
    if ((quantile(sorted, 0.75) - quantile(sorted, 0.25)) / median > MOST_SPREAD) return null;
    return median * FWHM_PER_SIGMA;
  }

  #look(planes: readonly [StoredArray, StoredArray, StoredArray]): void {
    const [nx, ny] = this.#size;
    const contrast = contrastOf(planes[1]);
    if (!(contrast > 0)) return;
    const [sx, sy, sz] = this.#spacing;
    const along = { nu: nx, nv: ny, stepU: 1, stepV: nx, spacing: [sx, sy, sz] as const };
    const down = { nu: ny, nv: nx, stepU: nx, stepV: 1, spacing: [sy, sx, sz] as const };
    for (const way of [along, down])
      for (const [u, v] of steepPlaces(planes, way, contrast)) {
        const sigma = sigmaAt(planes, way, u, v, contrast);
        if (sigma !== null) this.#sigmas.push(sigma);
      }
  }
}

/** One of the two directions in a slice: voxels along (u) and beside (v) it, and their strides. */
interface Way {
  readonly nu: number;
  readonly nv: number;
  readonly stepU: number;
  readonly stepV: number;
  readonly spacing: readonly [number, number, number];
}

function contrastOf(plane: StoredArray): number {
  const stride = Math.max(1, Math.floor(plane.length / 4096)) | 1;
  const sample: number[] = [];
  for (let i = 0; i < plane.length; i += stride) if (Number.isFinite(plane[i]!)) sample.push(plane[i]!);
  const sorted = Float64Array.from(sample).sort();
  return quantile(sorted, 0.995) - quantile(sorted, 0.005);
}

/** Places where the slices change most along u (nine profiles averaged), at most {@link EDGES}, evenly drawn from all. */
function steepPlaces(planes: readonly StoredArray[], way: Way, contrast: number): (readonly [number, number])[] {
  // As v * nu + u: in a noisy scan there are millions.
  const found: number[] = [];
  const reach = REACHES[REACHES.length - 1]!;
  const least = 0.15 * contrast;
  const profile = new Float64Array(way.nu);
  for (let v = BESIDE; v < way.nv - BESIDE; v += 3) {
    profile.fill(0);
    for (const plane of planes)
      for (let beside = v - 1; beside <= v + 1; beside++)
        for (let u = 0, at = beside * way.stepV; u < way.nu; u++, at += way.stepU) profile[u] = profile[u]! + plane[at]! / 9;
    const rise = (u: number) => Math.abs(profile[u + 1]! - profile[u - 1]!);
    for (let u = reach + 1; u < way.nu - reach - 1; u++) {
      const here = rise(u);
      if (here >= least && here >= rise(u - 1) && here > rise(u + 1)) found.push(v * way.nu + u);
    }
  }
  const stride = Math.max(1, found.length / EDGES);
  return Array.from({ length: Math.min(EDGES, found.length) }, (_, k) => {
    const place = found[Math.floor(k * stride)]!;
    return [place % way.nu, Math.floor(place / way.nu)];
  });
}

/** Sigma of the edge at a place, millimetres; null when no length of profile shows a plain edge there. */
function sigmaAt(planes: readonly StoredArray[], way: Way, u0: number, v0: number, contrast: number): number | null {
  for (const reach of REACHES) {
    if (u0 - reach < 0 || u0 + reach >= way.nu) continue;
    const nu = 2 * reach + 1;
    const nv = 2 * BESIDE + 1;
    const values = new Float64Array(nu * nv * 3);
    let k = 0;
    for (const plane of planes)
      for (let v = v0 - BESIDE; v <= v0 + BESIDE; v++)
        for (let u = u0 - reach; u <= u0 + reach; u++) values[k++] = plane[v * way.stepV + u * way.stepU]!;
    const block: EdgeBlock = { values, nu, nv, nw: 3, spacing: way.spacing };
    const fit = fitEdge(block);
    if (!fit || Math.abs(fit.step) < LEAST_STEP * contrast || fit.misfit > Math.max(MOST_MISFIT, 3 * fit.misfitByNoise)) continue;
    if (Math.abs(fit.tilt[0]) > MOST_TILT || Math.abs(fit.tilt[1]) > MOST_TILT) continue;
    const inVoxels = fit.sigmaMm / way.spacing[0];
    if (inVoxels >= 0.2 && inVoxels <= reach / 2.2) return fit.sigmaMm;
  }
  return null;
}
