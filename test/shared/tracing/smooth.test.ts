import { describe, expect, it } from "vitest";
import { smoothInto } from "#shared/tracing/smooth.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

/** The same penalised problem as a dense linear system, by Gaussian elimination with pivoting. */
function dense(targets: Float64Array, weights: Float64Array, lambdas: Float64Array): Float64Array {
  const n = targets.length / 3;
  const out = new Float64Array(3 * n);
  for (let c = 0; c < 3; c++) {
    const a = Array.from({ length: n }, () => new Float64Array(n + 1));
    for (let i = 0; i < n; i++) {
      if (i === 0 || i === n - 1) {
        a[i]![i] = 1;
        a[i]![n] = targets[3 * i + c]!;
        continue;
      }
      a[i]![i]! += weights[i]!;
      a[i]![n]! += weights[i]! * targets[3 * i + c]!;
      for (let k = Math.max(1, i - 1); k <= Math.min(n - 2, i + 1); k++)
        for (let b = 0; b < 3; b++)
          if (k - 1 + b >= 0) a[i]![k - 1 + b]! += lambdas[k]! * [1, -2, 1][i - k + 1]! * [1, -2, 1][b]!;
    }
    for (let p = 0; p < n; p++) {
      let best = p;
      for (let r = p; r < n; r++) if (Math.abs(a[r]![p]!) > Math.abs(a[best]![p]!)) best = r;
      [a[p], a[best]] = [a[best]!, a[p]!];
      for (let r = 0; r < n; r++) {
        if (r === p) continue;
        const f = a[r]![p]! / a[p]![p]!;
        for (let k = p; k <= n; k++) a[r]![k]! -= f * a[p]![k]!;
      }
    }
    for (let i = 0; i < n; i++) out[3 * i + c] = a[i]![n]! / a[i]![i]!;
  }
  return out;
}

describe("smoothing a curve", () => {
  it("solves the same problem as a dense elimination, with the ends held", () => {
    const random = seeded(3);
    for (const n of [3, 4, 5, 17]) {
      const targets = Float64Array.from({ length: 3 * n }, () => 10 * random());
      const weights = Float64Array.from({ length: n }, random);
      const lambdas = Float64Array.from({ length: n }, () => 20 * random());
      const out = new Float64Array(3 * n);
      smoothInto(targets, weights, lambdas, out);
      const slow = dense(targets, weights, lambdas);
      for (let i = 0; i < 3 * n; i++) expect(out[i]).toBeCloseTo(slow[i]!, 9);
      expect([...out.slice(0, 3)]).toEqual([...targets.slice(0, 3)]);
      expect([...out.slice(-3)]).toEqual([...targets.slice(-3)]);
    }
  });

  it("leaves straight curves alone and bridges points that do not count by a straight line", () => {
    const n = 20;
    const line = Float64Array.from({ length: 3 * n }, (_, i) => Math.floor(i / 3) * [1, 2, -1][i % 3]!);
    const out = new Float64Array(3 * n);
    smoothInto(line, new Float64Array(n).fill(1), new Float64Array(n).fill(50), out);
    for (let i = 0; i < 3 * n; i++) expect(out[i]).toBeCloseTo(line[i]!, 9);
    const bent = line.slice();
    bent[3 * 10] = bent[3 * 10]! + 5;
    smoothInto(bent, new Float64Array(n), new Float64Array(n).fill(1), bent);
    for (let i = 0; i < 3 * n; i++) expect(bent[i]).toBeCloseTo(line[i]!, 3);
  });

  it("takes one and two points as they are", () => {
    const two = Float64Array.of(1, 2, 3, 4, 5, 6);
    const out = new Float64Array(6);
    smoothInto(two, new Float64Array(2), new Float64Array(2), out);
    expect(out).toEqual(two);
  });
});
