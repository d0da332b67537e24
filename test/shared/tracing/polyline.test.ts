import { describe, expect, it } from "vitest";
import { arcLengths, interpolateAlong, resample, runningMean, runningMedian, tangents } from "#shared/tracing/polyline.ts";

const circle = (n: number) =>
  Float64Array.from({ length: 3 * n }, (_, i) => {
    const angle = ((Math.PI / 2) * Math.floor(i / 3)) / (n - 1);
    return [2 * Math.cos(angle), 2 * Math.sin(angle), 1][i % 3]!;
  });

describe("polylines", () => {
  it("are resampled at even steps with exact ends, following a bend instead of cutting it", () => {
    const points = circle(9);
    const fine = resample(points, 0.05);
    expect([...fine.slice(0, 3)]).toEqual([...points.slice(0, 3)]);
    expect([...fine.slice(-3)]).toEqual([...points.slice(-3)]);
    const arc = arcLengths(fine);
    for (let i = 1; i < arc.length; i++) expect(arc[i]! - arc[i - 1]!).toBeCloseTo(0.05, 2);
    // A quarter circle of radius 2: chords of the nine points leave it by up to 0.0096, the cubic away from the ends by a tenth.
    for (let i = Math.floor(arc.length / 4); i < (3 * arc.length) / 4; i++)
      expect(Math.abs(Math.hypot(fine[3 * i]!, fine[3 * i + 1]!) - 2)).toBeLessThan(0.001);
  });

  it("of one place twice stay two points", () => {
    expect([...resample(Float64Array.of(1, 2, 3, 1, 2, 3), 0.1)]).toEqual([1, 2, 3, 1, 2, 3]);
    expect([...tangents(Float64Array.of(1, 2, 3, 1, 2, 3))]).toEqual([0, 0, 0, 0, 0, 0]);
  });

  it("have tangents of length one along the curve", () => {
    const t = tangents(circle(50));
    for (let i = 0; i < 50; i++) expect(Math.hypot(t[3 * i]!, t[3 * i + 1]!, t[3 * i + 2]!)).toBeCloseTo(1, 12);
    const angle = Math.PI / 4;
    expect(t[3 * 24]! / t[3 * 24 + 1]!).toBeCloseTo(-Math.tan(angle), 1);
  });

  it("carry values along by arc length, not a number only between values that are none", () => {
    const from = Float64Array.of(0, 1, 3);
    const values = Float64Array.of(10, 20, Number.NaN);
    expect([...interpolateAlong(from, values, Float64Array.of(-1, 0, 0.5, 1, 2, 9))]).toEqual([
      10,
      10,
      15,
      20,
      Number.NaN,
      Number.NaN,
    ]);
  });

  it("are smoothed by medians and means that pass over missing values and spare tapers at the ends", () => {
    const values = Float64Array.of(1, 2, 100, 4, Number.NaN, 6, 7);
    expect([...runningMedian(values, 1)]).toEqual([1.5, 2, 4, 52, 5, 6.5, 6.5]);
    expect(runningMean(Float64Array.of(1, 2, 3, 4, 5), 2)[2]).toBe(3);
    expect(runningMean(Float64Array.of(Number.NaN, Number.NaN), 1)[0]).toBeNaN();
  });
});
