import { describe, expect, it } from "vitest";
import { mmPerUnit, toMm } from "#shared/volume/length-unit.ts";

describe("a unit of length", () => {
  it.each([
    ["nm", 1e-6],
    ["um", 1e-3],
    ["\u00b5m", 1e-3],
    ["\u03bcm", 1e-3],
    ["micron", 1e-3],
    ["Microns", 1e-3],
    ["micrometer", 1e-3],
    ["micrometres", 1e-3],
    ["mm", 1],
    ["millimeter", 1],
    ["cm", 10],
    ["centimetre", 10],
    ["m", 1000],
    ["metre", 1000],
    ["nanometer", 1e-6],
    ["inch", 25.4],
    [" mm ", 1],
  ])("%j is %f mm", (word, expected) => {
    expect(mmPerUnit(word)).toBe(expected);
  });

  it.each(["", "???", "pixel", "second", "MM", "Mm", "mmm", "constructor", "toString", null, undefined])("%j is none", (word) => {
    expect(mmPerUnit(word)).toBeNull();
  });

  it("turns micrometres to the millimetres that a person would write", () => {
    expect([40, 20, 12.5, 6.7, 33].map((um) => toMm(um, 1e-3))).toEqual([0.04, 0.02, 0.0125, 0.0067, 0.033]);
    expect(toMm(40000, 1e-6)).toBe(0.04);
    expect(toMm(0.004, 10)).toBeCloseTo(0.04, 15);
  });
});
