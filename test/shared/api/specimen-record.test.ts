import { describe, expect, it } from "vitest";
import { isSpecimenFacts, parseSpecimenRecord } from "#shared/api/specimen-record.ts";

const whole = () => ({
  format: "tautline-specimen",
  version: 1,
  id: "abc",
  name: "HB-07",
  created: 1,
  synthetic: true,
  source: { name: "a.nrrd", family: "NRRD", bytes: 5, dtype: "uint32" },
  volume: {
    sha256: "0123456789abcdef".repeat(4),
    dtype: "uint16",
    size: [1, 2, 3],
    spacing: [0.04, 0.04, 0.04],
    origin: [0, 0, -1],
    direction: [1, 0, 0, 0, 1, 0, 0, 0, 1],
    frame: "LPS",
    handedness: "unknown",
    blurFwhmMm: null,
    range: { min: 0, max: 9 },
  },
  conversions: [],
  polarity: "bright",
  display: { low: 0, high: 9 },
  facts: { species: "porcine", pressure: 100 },
  landmarks: {
    annulus: { closed: true, points: [[0, 0, 0]] },
    muscleHeads: [{ muscle: "antero-lateral", head: 1, position: [1, 2, 3] }],
  },
  later: "kept",
});

describe("a specimen record", () => {
  it("that is whole comes back as it is, unknown keys included", () => {
    expect(parseSpecimenRecord(whole(), "specimen.json")).toEqual(whole());
  });

  it("of a newer version is refused with what to do", () => {
    expect(() => parseSpecimenRecord({ ...whole(), version: 2 }, "specimen.json")).toThrow(
      /expected version 1, found version 2.*newer/,
    );
  });

  it("without any one of its fields, or with a wrong one, is refused with the field's name", () => {
    const optional = new Set(["later", "species", "pressure", "annulus", "muscleHeads"]);
    let refused = 0;
    const visit = (path: string[], value: unknown) => {
      if (typeof value !== "object" || value === null || Array.isArray(value)) return;
      for (const key of Object.keys(value)) {
        if (key === "later") continue;
        for (const wrong of [undefined, { odd: true }, 1.5]) {
          if (wrong === undefined && optional.has(key)) continue;
          if (typeof wrong === "number" && ["min", "max", "low", "high", "pressure", "blurFwhmMm"].includes(key)) continue;
          const changed = structuredClone(whole()) as Record<string, unknown>;
          let at = changed;
          for (const step of path) at = at[step] as Record<string, unknown>;
          if (wrong === undefined) delete at[key];
          else at[key] = wrong;
          if (key === "facts" || key === "landmarks") {
            if (typeof wrong === "object") continue; // an object of unknown keys only is allowed there
          }
          expect(
            () => parseSpecimenRecord(changed, "specimen.json"),
            `${path.join(".")}.${key} = ${JSON.stringify(wrong)}`,
          ).toThrow(/specimen\.json/);
          refused++;
        }
        visit([...path, key], (value as Record<string, unknown>)[key]);
      }
    };
    const { landmarks: _, ...rest } = whole();
    visit([], { ...rest, landmarks: {} });
    expect(refused).toBeGreaterThan(60);
  });

  it.each([null, 5, "x", [], {}])("that is %j is refused", (value) => {
    expect(() => parseSpecimenRecord(value, "specimen.json")).toThrow(/specimen\.json/);
  });

  it("has facts that are texts and a pressure that is a number", () => {
    expect(isSpecimenFacts({ species: "ovine", pressure: 0 })).toBe(true);
    expect(isSpecimenFacts({ species: 5 })).toBe(false);
    expect(isSpecimenFacts({ pressure: "100" })).toBe(false);
    expect(isSpecimenFacts(null)).toBe(false);
  });
});
