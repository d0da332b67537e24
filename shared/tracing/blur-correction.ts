/** A Gaussian's full width at half maximum over its standard deviation. */
export const FWHM_PER_SIGMA = 2 * Math.sqrt(2 * Math.LN2);

/**
 * Profile at distance `at` from the axis of a cylinder of radius `radius` and contrast 1, blurred by a Gaussian of standard
 * deviation 1 (all in units of it).
 * @source own derivation: radial integral of the Gaussian, f(p) = integral over s < R of s exp(-(p - s)^2 / 2) [exp(-ps) I0(ps)] ds,
 *   by Simpson's rule.
 */
export function blurredCylinder(radius: number, at: number): number {
  const from = Math.max(0, at - 7);
  const to = Math.min(radius, at + 7);
  if (to <= from) return 0;
  const steps = 2 * Math.max(8, Math.ceil((to - from) * 8));
  const h = (to - from) / steps;
  let sum = 0;
  for (let i = 0; i <= steps; i++) {
    const s = from + i * h;
    const weight = i === 0 || i === steps ? 1 : i % 2 === 1 ? 4 : 2;
    sum += weight * s * Math.exp(-((at - s) ** 2) / 2) * scaledBesselI0(at * s);
  }
  return (sum * h) / 3;
}

/** exp(-x) I0(x), x >= 0. @source Abramowitz & Stegun 1964, 9.8.1 and 9.8.2 (error below 2e-7). */
function scaledBesselI0(x: number): number {
  if (x < 3.75) {
    const t = (x / 3.75) ** 2;
    const i0 = 1 + t * (3.5156229 + t * (3.0899424 + t * (1.2067492 + t * (0.2659732 + t * (0.0360768 + t * 0.0045813)))));
    return i0 * Math.exp(-x);
  }
  const t = 3.75 / x;
  return (
    (0.39894228 +
      t *
        (0.01328592 +
          t *
            (0.00225319 +
              t *
                (-0.00157565 + t * (0.00916281 + t * (-0.02057706 + t * (0.02635537 + t * (-0.01647633 + t * 0.00392377)))))))) /
    Math.sqrt(x)
  );
}

/**
 * Width at half height over true diameter of a blurred cylinder, for a true diameter of `diameter` blur widths (FWHM).
 * Half height is half of the mean level within `insideShare` of the half width from the axis (0: half of the peak).
 */
export function widthRatio(diameter: number, insideShare = 0): number {
  const radius = (diameter * FWHM_PER_SIGMA) / 2;
  let half = halfWidth(radius, blurredCylinder(radius, 0));
  // The inside level depends on the half width, which depends on it: settled within a few rounds.
  for (let round = 0; insideShare > 0 && round < 4; round++) half = halfWidth(radius, meanInside(radius, insideShare * half));
  return half / radius;
}

function halfWidth(radius: number, inside: number): number {
  let low = 0;
  let high = radius + 6;
  for (let i = 0; i < 28; i++) {
    const middle = (low + high) / 2;
    if (blurredCylinder(radius, middle) > inside / 2) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Mean level over the disc of radius `to` about the axis. */
function meanInside(radius: number, to: number): number {
  const rings = 4;
  let sum = 0;
  for (let i = 0; i < rings; i++) sum += blurredCylinder(radius, to * Math.sqrt((i + 0.5) / rings));
  return sum / rings;
}

const LEAST = 0.1;
const MOST = 12;
const TABLE_STEP = 0.1;
const tables = new Map<number, Float64Array>();

/** Measured widths (in blur widths) for true diameters from 0.1 in steps of 0.1 blur widths. */
function widthTable(insideShare: number): Float64Array {
  const known = tables.get(insideShare);
  if (known) return known;
  const table = Float64Array.from({ length: Math.round((MOST - LEAST) / TABLE_STEP) + 1 }, (_, i) => {
    const diameter = LEAST + i * TABLE_STEP;
    return diameter * widthRatio(diameter, insideShare);
  });
  tables.set(insideShare, table);
  return table;
}

/**
 * True diameter of the cylinder whose blurred image is `width` wide at half height, in the unit of both arguments; 0 when
 * the width is that of the blur alone.
 * @param insideShare how the inside level was taken, see {@link widthRatio}.
 */
export function correctedDiameter(width: number, fwhm: number, insideShare = 0): number {
  if (!(fwhm > 0)) return width;
  const w = width / fwhm;
  const table = widthTable(insideShare);
  const last = table.length - 1;
  if (w <= table[0]!) return 0;
  if (w >= table[last]!) {
    // Far above the blur the edge moves by sigma^2 / (2 R): solved for the diameter.
    const s = 1 / FWHM_PER_SIGMA;
    return fwhm * ((w + Math.sqrt(w * w + 8 * s * s)) / 2);
  }
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (table[middle]! <= w) low = middle;
    else high = middle;
  }
  const t = (w - table[low]!) / (table[high]! - table[low]!);
  return fwhm * (LEAST + (low + t) * TABLE_STEP);
}
