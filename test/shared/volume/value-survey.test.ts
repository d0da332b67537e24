import { describe, expect, it } from "vitest";
import { viewAs } from "#shared/volume/source-array.ts";
import { displayWindow, histogramOf, quantile, suggestPolarity, ValueSurvey } from "#shared/volume/value-survey.ts";
import { seeded } from "#test/main/intake/written-by-hand.ts";

describe("a survey of values", () => {
  it("finds least and greatest of every type as a naive look does, over runs of any length", () => {
    const random = seeded(11);
    for (const Kind of [Uint8Array, Int8Array, Uint16Array, Int16Array, Uint32Array, Int32Array, Float32Array, Float64Array]) {
      const bytes = Uint8Array.from({ length: 1000 * 8 }, () => Math.floor(random() * 256));
      const values = new Kind(bytes.buffer.slice(0, Kind.BYTES_PER_ELEMENT * 999));
      const survey = new ValueSurvey(values.length);
      for (let at = 0; at < values.length; at += 37) survey.add(values.subarray(at, at + 37));
      const finite = Array.from(values).filter(Number.isFinite);
      const facts = survey.facts();
      expect([facts.min, facts.max]).toEqual([Math.min(...finite), Math.max(...finite)]);
      expect(facts.voxels).toBe(999);
      expect(survey.sortedSample()).toEqual(Float64Array.from(finite).sort());
    }
  });

  it("says of float voxels whether all are integers, and leaves non-finite ones out of the range", () => {
    const survey = new ValueSurvey(5);
    survey.add(Float32Array.of(3, 4));
    expect(survey.facts()).toMatchObject({ min: 3, max: 4, integral: true });
    survey.add(Float32Array.of(Number.NaN, Number.POSITIVE_INFINITY, -2));
    expect(survey.facts()).toMatchObject({ min: -2, max: 4, integral: false });
  });

  it("of nothing but non-finite values has a range of 0 to 0", () => {
    const survey = new ValueSurvey(1);
    survey.add(Float64Array.of(Number.NaN));
    expect(survey.facts()).toMatchObject({ min: 0, max: 0 });
    expect(displayWindow(survey.sortedSample())).toEqual({ low: 0, high: 1 });
  });

  it("finds the greatest rounding to float32, in 64-bit integers exactly", () => {
    const survey = new ValueSurvey(3);
    survey.add(viewAs("uint64", BigUint64Array.of(2n ** 60n + 1n, 16777217n, 5n).buffer, 0, 3));
    expect(survey.facts().float32Rounding).toBe(1);
    const beyond = new ValueSurvey(1);
    beyond.add(Float64Array.of(1e39));
    expect(beyond.facts().float32Rounding).toBe(Number.POSITIVE_INFINITY);
  });

  it("keeps a sample of bounded size, spread over the whole stream", () => {
    const survey = new ValueSurvey(1_000_000, 1000);
    for (let k = 0; k < 100; k++) survey.add(new Uint8Array(10_000).fill(k));
    const sample = survey.sortedSample();
    expect(sample.length).toBeGreaterThan(900);
    expect(sample.length).toBeLessThan(1100);
    expect(new Set(sample).size).toBe(100);
  });
});

describe("figures of a sorted sample", () => {
  const sample = Float64Array.from({ length: 1001 }, (_, k) => k);
  it("are linear quantiles", () => {
    expect([0, 0.005, 0.5, 0.998, 1].map((q) => quantile(sample, q))).toEqual([0, 5, 500, 998, 1000]);
    expect(quantile(Float64Array.of(1, 2), 0.25)).toBe(1.25);
    expect(quantile(new Float64Array(0), 0.5)).toBe(0);
  });
  it("give a display window that is never empty", () => {
    expect(displayWindow(sample)).toEqual({ low: 5, high: 998 });
    expect(displayWindow(Float64Array.of(7, 7, 7))).toEqual({ low: 7, high: 8 });
  });
  it("give a histogram whose counts add up and whose last bin holds the greatest value", () => {
    const counts = histogramOf(sample, 0, 1000, 10);
    expect(counts).toEqual([100, 100, 100, 100, 100, 100, 100, 100, 100, 101]);
    expect(histogramOf(Float64Array.of(3, 3), 3, 3, 4)).toEqual([2, 0, 0, 0]);
  });
  it("suggest bright strings where most is dark, and the reverse", () => {
    const mostlyDark = Float64Array.from({ length: 100 }, (_, k) => (k < 80 ? 10 : 200));
    expect(suggestPolarity(mostlyDark)).toBe("bright");
    expect(suggestPolarity(mostlyDark.map((v) => 255 - v).sort())).toBe("dark");
  });
});
