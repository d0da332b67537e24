import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { blandAltmanPlot } from "#shared/report/bland-altman-plot.ts";
import { MARK_NAMES, plotMark, roundTicks, tickText } from "#shared/report/plot-marks.ts";
import { rowPlot } from "#shared/report/row-plot.ts";
import { spreadPictures } from "#shared/report/spread-picture.ts";

const numbersOf = (svg: string, attribute: string) =>
  [...svg.matchAll(new RegExp(` ${attribute}="([^"]*)"`, "g"))].map((match) => Number(match[1]));

describe("ticks", () => {
  it.each([
    [0, 1],
    [-3.2, 17.8],
    [0.0012, 0.0019],
    [-1e4, 2.5e4],
  ])("stand at round places inside the range %s to %s", (low, high) => {
    const ticks = roundTicks(low, high);
    expect(ticks.length).toBeGreaterThanOrEqual(2);
    expect(ticks.length).toBeLessThanOrEqual(11);
    expect(ticks[0]!).toBeGreaterThanOrEqual(low - 1e-9);
    expect(ticks.at(-1)!).toBeLessThanOrEqual(high + 1e-9);
    const steps = ticks.slice(1).map((tick, k) => tick - ticks[k]!);
    for (const step of steps) expect(step).toBeCloseTo(steps[0]!, 9);
  });

  it("carry a true minus sign, and none at nought", () => {
    expect(tickText(-0.25)).toBe("\u22120.25");
    expect(tickText(-0)).toBe("0");
    expect(roundTicks(2, 2)).toEqual([2]);
  });
});

describe("marks", () => {
  it("have shapes of their own", () => {
    const drawn = MARK_NAMES.map((_, kind) => plotMark(kind, 10, 10, 3, "#000000", true));
    expect(new Set(drawn).size).toBe(MARK_NAMES.length);
  });
});

describe("a plot of differences", () => {
  const points = [-1, 0.5, 2].map((difference, group) => ({ mean: 10 + group, difference, group }));
  const plot = (more: Partial<Parameters<typeof blandAltmanPlot>[0]> = {}) =>
    blandAltmanPlot({
      label: "differences",
      heading: "A - B",
      unit: "mm",
      points,
      bias: { value: 0.5, low: -0.2, high: 1.2 },
      limits: [
        { value: -2, low: -3, high: -1 },
        { value: 3, low: 2, high: 4 },
      ],
      ...more,
    });

  it("draws the bias between its limits, and a band for every interval", () => {
    const levels = [...plot().matchAll(/<line [^>]*y1="([^"]*)"[^>]*stroke-width="1.3"( stroke-dasharray="6 3")?/g)];
    const [bias, lower, upper] = levels.map((match) => Number(match[1]));
    expect(levels.map((match) => match[2] !== undefined)).toEqual([false, true, true]);
    expect(upper!).toBeLessThan(bias!);
    expect(bias!).toBeLessThan(lower!);
    expect(plot().match(/fill-opacity="0.1"/g)).toHaveLength(3);
  });

  it("draws no band where there is no interval, and no limit where there is none", () => {
    const bare = plot({ bias: { value: 0.5, low: null, high: null }, limits: null });
    expect(bare).not.toContain("fill-opacity");
    expect(bare).not.toContain("stroke-dasharray");
  });

  it("stays inside its drawing when all values are the same", () => {
    const flat = plot({
      points: points.map((one) => ({ ...one, mean: 5, difference: 0 })),
      bias: { value: 0, low: null, high: null },
      limits: null,
    });
    for (const y of numbersOf(flat, "y1")) expect(y >= 0 && y <= 236).toBe(true);
    expect(flat).not.toMatch(/NaN|Infinity/);
  });

  it("escapes its words", () => {
    expect(plot({ heading: "<b>" })).toContain("&lt;b&gt;");
  });
});

describe("a plot of rows", () => {
  it("keeps equal values of different shapes apart", () => {
    const marks = [0, 1, 2].map((shape) => ({ value: 7, shape, isFilled: true }));
    const drawn = rowPlot("rows", [{ name: "HB-07", marks }], "insertions", ["AN-1", "AN-2", "AN-3"]);
    expect(drawn.match(/<circle /g)).toHaveLength(2);
    const circle = Number(/<circle cx="[^"]*" cy="([^"]*)" r="3.8"/.exec(drawn)![1]);
    const triangle = Number(
      /M[\d.]+ ([\d.]+)L[^"]*Z" fill="#0b5a8a" stroke="#0b5a8a" stroke-width="1.2"\/>(?!<text)/.exec(drawn)![1],
    );
    expect(triangle).toBeGreaterThan(circle);
  });
});

describe("pictures of where lines differ", () => {
  const line: Vec3[] = Array.from({ length: 11 }, (_, k) => [0, 0, k]);
  const at = (values: readonly number[], isPartial: boolean) =>
    spreadPictures("strands", [{ line, values, isPartial }], [0.1, 0.2, 0.4])[0]!;
  const widths = (svg: string) => numbersOf(svg, "stroke-width");

  it("grow wider and darker with the value, and are dashed where somebody lacks the line", () => {
    const [low, high] = [
      at(
        line.map(() => 0.05),
        false,
      ),
      at(
        line.map(() => 0.5),
        false,
      ),
    ];
    expect(widths(low)[0]!).toBeLessThan(widths(high)[0]!);
    expect(low).not.toContain("stroke-dasharray");
    expect(at([], true)).toContain("stroke-dasharray");
  });

  it("leave no gap where the value passes a limit", () => {
    const stretches = [
      ...at(
        line.map((_, k) => (k < 5 ? 0.05 : 0.5)),
        false,
      ).matchAll(/<polyline points="([^"]*)"/g),
    ].map((match) => match[1]!.split(" "));
    expect(stretches).toHaveLength(2);
    expect(stretches[0]!.at(-1)).toBe(stretches[1]![0]);
  });

  it("say so when there is nothing to draw", () => {
    expect(spreadPictures("strands", [], [0.1, 0.2, 0.4])[0]).toContain("No strand");
  });
});
