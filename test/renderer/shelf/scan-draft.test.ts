import { expect, test } from "vitest";
import { draftOf, intakeOf, needsCheck, readNumber, spacingDoubts, typedSpacing } from "#renderer/shelf/add-scan/scan-draft.ts";
import { lookOf } from "#test/browser/shelf/page/made-up-shelf.ts";

const settled = lookOf(true).info;
const bare = lookOf(false).info;
const sent = (info: typeof settled, change: Partial<ReturnType<typeof draftOf>> = {}) =>
  intakeOf("/scans/a.nrrd", info, { ...draftOf(info, "bright"), ...change });

test("a header that settles a plain voxel size is taken over as it stands, in millimetres", () => {
  const order = sent(settled);
  expect(order).toMatchObject({
    request: {
      path: "/scans/a.nrrd",
      name: "K-113",
      spacing: [0.04, 0.04, 0.04],
      handedness: "unknown",
      polarity: "bright",
      facts: {},
    },
  });
  expect("request" in order && "mirror" in order.request).toBe(false);
});

test("without a unit nothing is guessed: the person has to say it and to stand for it", () => {
  expect(draftOf(bare, "bright")).toMatchObject({ unit: null, spacing: ["40", "40", "40"] });
  expect(sent(bare)).toEqual({ missing: ["Say whether the voxel size is in micrometres or millimetres."] });
  expect(sent(bare, { unit: "µm" })).toEqual({ missing: ["Confirm that the voxel size is right."] });
  expect(sent(bare, { unit: "µm", checked: true })).toMatchObject({ request: { spacing: [0.04, 0.04, 0.04] } });
});

test("a changed or odd voxel size needs the person's word", () => {
  expect(needsCheck(settled, [0.04, 0.04, 0.04])).toBe(false);
  expect(needsCheck(settled, [0.05, 0.05, 0.05])).toBe(true);
  expect(sent(settled, { spacing: ["50", "50", "50"] })).toEqual({ missing: ["Confirm that the voxel size is right."] });
  // 40 mm voxels: outside 1-500 micrometres, and sides of 41 m outside 5-200 mm.
  expect(spacingDoubts(settled, [40, 40, 40]).join(" ")).toMatch(/0\.001-0\.5 mm.*5-200 mm/);
  expect(spacingDoubts(settled, [0.04, 0.04, 0.08]).join(" ")).toMatch(/not cubes/);
  expect(spacingDoubts(settled, [0.04, 0.04, 0.04])).toEqual([]);
});

test("numbers are read with point or comma, and nothing else is taken for a number", () => {
  expect(["40", " 32,5 ", ".5", "4e-2", "1."].map(readNumber)).toEqual([40, 32.5, 0.5, 0.04, 1]);
  expect(["", "40 um", "1,000,5", "0x10", "Infinity", "NaN", "--1"].map(readNumber)).toEqual(Array(7).fill(null));
  expect(typedSpacing({ unit: "µm", spacing: ["40", "40", "0"] })).toBeNull();
  expect(typedSpacing({ unit: "mm", spacing: ["0,04", "0.04", "0.05"] })).toEqual([0.04, 0.04, 0.05]);
  expect(typedSpacing({ unit: "µm", spacing: ["40", "40", "-40"] })).toBeNull();
});

test("mirrored slices are confirmed handedness with the order reversed; facts are trimmed and the pressure is a number", () => {
  expect(sent(settled, { handedness: "mirrored", species: " porcine ", pressure: "100" })).toMatchObject({
    request: { handedness: "confirmed", mirror: true, facts: { species: "porcine", pressure: 100 } },
  });
  expect(sent(settled, { handedness: "as-shown" })).toMatchObject({ request: { handedness: "confirmed" } });
  expect(sent(settled, { pressure: "high" })).toEqual({ missing: ["The pressure is a number of mmHg, or empty."] });
  expect(sent(settled, { name: "  " })).toEqual({ missing: ["Give the specimen a name."] });
});

test("a header without any numbers leaves the fields empty", () => {
  const nothing = { ...bare, headerSpacing: null };
  expect(draftOf(nothing, "dark")).toMatchObject({ spacing: ["", "", ""], unit: null, polarity: "dark" });
  expect(sent(nothing, { unit: "mm" })).toEqual({ missing: ["Give the voxel size along each axis, as positive numbers."] });
});
