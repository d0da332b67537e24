import { expect, test } from "vitest";
import { projectScene } from "#renderer/section/project-scene.ts";
import { EMPTY_SECTION } from "#renderer/section/section-view.ts";
import type { ViewPlane } from "#renderer/section/view-plane.ts";
import { pointMm } from "#shared/geometry/types.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";

const size = { width: 400, height: 400, ratio: 1 };
// 0.1 mm a pixel; the pane's middle is (20, 20, 0), so pixel = 10 * mm.
const plane: ViewPlane = { centre: pointMm(20, 20, 0), right: [1, 0, 0], down: [0, 1, 0], mmPerPx: 0.1 };

const strand = (id: `s${number}`, more: Partial<DrawnStrand>): DrawnStrand => ({
  id,
  tree: "t1",
  name: "ALPM-01",
  points: Float64Array.of(5, 10, 0, 35, 10, 0),
  radii: Float64Array.of(0.2, 0.2),
  pins: [],
  mark: { colour: 0, dash: 0 },
  doubtful: false,
  traced: true,
  ...more,
});

test("strands given beside a document are shown instead of its own, picked as they say themselves", () => {
  const strands = [strand("s1", { picked: true }), strand("s1", { picked: false }), strand("s2", {})];
  const scene = projectScene({ ...EMPTY_SECTION, strands, selection: { strand: "s2" } }, plane, size);
  expect(scene.strands.map(({ selected }) => selected)).toEqual([true, false, true]);
  expect([...scene.strands[0]!.seen]).toEqual([50, 100, 0, 350, 100, 0]);
});

test("marked places lie where they are, and show only near the slab and in the pane", () => {
  const place = (x: number, y: number, z: number) => ({
    at: pointMm(x, y, z),
    glyph: NODE_GLYPHS.fork,
    colour: null,
    picked: false,
  });
  const places = [place(10, 30, 1), place(10, 30, 9), place(300, 30, 0)];
  const scene = projectScene({ ...EMPTY_SECTION, places }, plane, size);
  expect(scene.places.map(({ seen }) => seen)).toEqual([{ x: 100, y: 300, depthMm: 1 }]);
});
