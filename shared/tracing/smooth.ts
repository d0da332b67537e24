/**
 * Fills `out` with the curve that minimises sum w |p - q|^2 + sum lambda |second difference of p|^2, its two ends held at
 * the first and last target. Straight curves and equal steps come back unchanged; a bend of radius R moves by about
 * (smoothing length)^4 / R^3.
 * @param targets shape [n, 3], q; borrowed.
 * @param weights shape [n], not negative; the ends' are not looked at.
 * @param lambdas shape [n], not negative: (smoothing length / step)^4 at each inner point.
 * @param out shape [n, 3]; may be `targets` itself.
 * O(n): one banded factorisation for all three coordinates.
 * @source Whittaker 1923 (graduation); penalised least squares with second differences, Eilers & Marx 1996.
 */
export function smoothInto(targets: Float64Array, weights: Float64Array, lambdas: Float64Array, out: Float64Array): void {
  const n = targets.length / 3;
  const m = n - 2;
  if (m <= 0) {
    out.set(targets);
    return;
  }
  // Row i stands for inner point i + 1; symmetric, two bands above the diagonal.
  const diagonal = new Float64Array(m);
  const band1 = new Float64Array(m);
  const band2 = new Float64Array(m);
  const right = new Float64Array(3 * m);
  for (let i = 0; i < m; i++) {
    // A trace of weight keeps the system solvable where no target counts.
    const w = Math.max(weights[i + 1]!, 1e-9);
    diagonal[i] = diagonal[i]! + w;
    for (let c = 0; c < 3; c++) right[3 * i + c] = right[3 * i + c]! + w * targets[3 * (i + 1) + c]!;
  }
  for (let centre = 1; centre <= n - 2; centre++) {
    const lambda = lambdas[centre]!;
    const coefficient = [1, -2, 1];
    for (let a = 0; a < 3; a++) {
      const pointA = centre - 1 + a;
      if (pointA === 0 || pointA === n - 1) continue;
      for (let b = 0; b < 3; b++) {
        const pointB = centre - 1 + b;
        const value = lambda * coefficient[a]! * coefficient[b]!;
        if (pointB === 0 || pointB === n - 1) {
          for (let c = 0; c < 3; c++)
            right[3 * (pointA - 1) + c] = right[3 * (pointA - 1) + c]! - value * targets[3 * pointB + c]!;
        } else if (pointB === pointA) diagonal[pointA - 1] = diagonal[pointA - 1]! + value;
        else if (pointB === pointA + 1) band1[pointA - 1] = band1[pointA - 1]! + value;
        else if (pointB === pointA + 2) band2[pointA - 1] = band2[pointA - 1]! + value;
      }
    }
  }
  // L D L^T of the pentadiagonal matrix, in place.
  for (let i = 0; i < m; i++) {
    const d = diagonal[i]!;
    const l1 = band1[i]! / d;
    const l2 = band2[i]! / d;
    if (i + 1 < m) {
      diagonal[i + 1] = diagonal[i + 1]! - l1 * band1[i]!;
      band1[i + 1] = band1[i + 1]! - l1 * band2[i]!;
    }
    if (i + 2 < m) diagonal[i + 2] = diagonal[i + 2]! - l2 * band2[i]!;
    band1[i] = l1;
    band2[i] = l2;
  }
  for (let c = 0; c < 3; c++) {
    for (let i = 0; i < m; i++) {
      let value = right[3 * i + c]!;
      if (i >= 1) value -= band1[i - 1]! * right[3 * (i - 1) + c]!;
      if (i >= 2) value -= band2[i - 2]! * right[3 * (i - 2) + c]!;
      right[3 * i + c] = value;
    }
    for (let i = m - 1; i >= 0; i--) {
      let value = right[3 * i + c]! / diagonal[i]!;
      if (i + 1 < m) value -= band1[i]! * right[3 * (i + 1) + c]!;
      if (i + 2 < m) value -= band2[i]! * right[3 * (i + 2) + c]!;
      right[3 * i + c] = value;
    }
  }
  const first = [targets[0]!, targets[1]!, targets[2]!];
  const last = [targets[3 * n - 3]!, targets[3 * n - 2]!, targets[3 * n - 1]!];
  out.set(right, 3);
  out.set(first, 0);
  out.set(last, 3 * n - 3);
}
