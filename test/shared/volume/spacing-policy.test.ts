import { describe, expect, it } from "vitest";
import { sizeXyz, type Vec3 } from "#shared/geometry/types.ts";
import { mmPerUnit } from "#shared/volume/length-unit.ts";
import { gridOf, PLACELESS, type ScanHeader } from "#shared/volume/scan-header.ts";
import { judgeSpacing } from "#shared/volume/spacing-policy.ts";

function header(
  spacing: Vec3 | null,
  unit: string | null,
  size: Vec3 = [500, 500, 500],
  more: Partial<ScanHeader> = {},
): ScanHeader {
  const factor = mmPerUnit(unit);
  const mm: Vec3 | null = factor === null ? null : [factor, factor, factor];
  const base = { ...PLACELESS, family: "NRRD", dtype: "uint8", frame: "LPS" } as const;
  return { ...base, size: sizeXyz(...size), headerSpacing: spacing, unit, mmPerUnit: mm, originMmPerUnit: mm, ...more };
}

const codes = (h: ScanHeader) => judgeSpacing(h).warnings.map((w) => w.code);

describe("a header's voxel size", () => {
  it.each([
    ["all well", [40, 40, 40], "um", []],
    ["a ratio just inside", [40, 40, 40.003], "um", []],
    ["a ratio just outside", [40, 40, 40.005], "um", ["anisotropic"]],
    ["exactly 1", [1, 1, 1], "mm", ["spacing-one", "spacing-range", "size-range"]],
    ["exactly 1 along one axis", [0.5, 0.5, 1], "mm", ["spacing-one", "anisotropic", "spacing-range", "size-range"]],
    ["1 um and 500 um, the limits themselves", [1, 1, 500], "um", ["spacing-one", "anisotropic", "size-range"]],
    ["0.5 mm", [0.5, 0.5, 0.5], "mm", ["size-range"]],
    ["501 um", [501, 501, 501], "um", ["spacing-range", "size-range"]],
    ["0.9 um", [0.9, 0.9, 0.9], "um", ["spacing-range", "size-range"]],
    ["sides of 5 mm", [10, 10, 10], "um", []],
    ["sides below 5 mm", [9.9, 9.9, 9.9], "um", ["size-range"]],
    ["sides of 200 mm", [400, 400, 400], "um", []],
    ["no frame", [40, 40, 40], "um", ["no-frame"], { frame: "scan" }],
  ] as const)("%s: %j %s", (_, spacing, unit, expected, more?: Partial<ScanHeader>) => {
    const verdict = judgeSpacing(header(spacing, unit, [500, 500, 500], more));
    expect(verdict.warnings.map((w) => w.code)).toEqual(expected);
    expect(verdict.unsettled).toBe(false);
    expect(verdict.doubtful).toBe(expected.some((code) => code !== "no-frame"));
    expect(verdict.spacing).not.toBeNull();
  });

  it.each([
    [[40, 40, 40], null, ["no-unit"]],
    [[40, 40, 40], "pixel", ["no-unit"]],
    [[1, 1, 1], null, ["no-unit", "spacing-one"]],
    [[40, 40, 80], null, ["no-unit", "anisotropic"]],
    [null, "mm", ["no-spacing"]],
    [null, null, ["no-unit", "no-spacing"]],
    [[0, 1, 1], "mm", ["bad-spacing"]],
    [[-1, 2, 2], "mm", ["bad-spacing"]],
    [[Number.NaN, 2, 2], "mm", ["bad-spacing"]],
    [[Number.POSITIVE_INFINITY, 2, 2], "mm", ["bad-spacing"]],
  ] as const)("is unsettled for %j %s", (spacing, unit, expected) => {
    expect(judgeSpacing(header(spacing, unit))).toMatchObject({ spacing: null, unsettled: true });
    expect(codes(header(spacing, unit))).toEqual(expected);
  });
});

describe("the grid of a settled scan", () => {
  const origin: Vec3 = [400, 0, -80];
  it("has the header's origin in millimetres", () => {
    expect(gridOf(header([40, 40, 40], "um", [9, 9, 9], { origin }), [0.04, 0.04, 0.04]).origin).toEqual([0.4, 0, -0.08]);
  });
  it("keeps that origin when a person corrects one axis only", () => {
    expect(gridOf(header([40, 40, 40], "um", [9, 9, 9], { origin }), [0.04, 0.04, 0.05]).origin).toEqual([0.4, 0, -0.08]);
  });
  it("has an origin turned by the same factor when a person says that the unit was wrong", () => {
    const found = gridOf(header([40, 40, 40], "mm", [9, 9, 9], { origin }), [0.04, 0.04, 0.04]).origin;
    expect(found.map((v) => Number(v.toFixed(12)))).toEqual([0.4, 0, -0.08]);
  });
  it("has its origin at 0 where the header has no unit and no common factor tells it", () => {
    expect(gridOf(header([40, 40, 40], null, [9, 9, 9], { origin }), [0.04, 0.04, 0.05]).origin).toEqual([0, 0, 0]);
    expect(gridOf(header(null, null, [9, 9, 9], { origin }), [0.04, 0.04, 0.05]).origin).toEqual([0, 0, 0]);
  });
});
