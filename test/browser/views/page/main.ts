import "#renderer/app/theme.css";
import { fixedAxes, steppedBy } from "#renderer/section/planes.ts";
import type { SectionHit, SectionPlace } from "#renderer/section/section-content.ts";
import { SectionView } from "#renderer/section/section-view.ts";
import type { ViewPlane } from "#renderer/section/view-plane.ts";
import { SpaceView } from "#renderer/space/space-view.ts";
import { StripView } from "#renderer/strip/strip-view.ts";
import { arcLengths } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { greyOf, surfaceOf, syntheticTrees } from "#test/browser/views/page/synthetic-valve.ts";

// A page for tests only: the three imperative views with made-up trees, and what they reported.
document.documentElement.dataset.theme = new URLSearchParams(location.search).get("theme") ?? "dark";
const trees = syntheticTrees(11);
const grid = {
  size: sizeXyz(500, 500, 500),
  spacing: spacingMm(0.04, 0.04, 0.04),
  origin: pointMm(0, 0, 0),
  direction: IDENTITY3,
};
const told: { what: string; detail?: unknown }[] = [];
const tell = (what: string, detail?: unknown) => told.push({ what, detail });

let plane: ViewPlane = { centre: pointMm(10, 10, 9), ...fixedAxes("flat", IDENTITY3, null), mmPerPx: 0.022 };
const show = (next: ViewPlane) => {
  plane = next;
  const wanted = section.wantedPlane("still");
  section.show({ plane });
  const after = section.wantedPlane("still");
  if (after === null) return;
  section.show({
    image: {
      header: { dtype: "uint8", width: after.width, height: after.height, plane: after, level: 0 },
      body: greyOf(trees, after),
    },
  });
  void wanted;
  const size = section.size;
  space.show({
    plane: {
      centre: plane.centre,
      right: plane.right,
      down: plane.down,
      widthMm: size.width * plane.mmPerPx,
      heightMm: size.height * plane.mmPerPx,
    },
  });
};
const section: SectionView = new SectionView(document.getElementById("section")!, {
  hover: (place) => tell("hover", place.hit),
  leave: () => tell("leave"),
  click: (place: SectionPlace) => tell("click", place),
  pan: (next) => {
    tell("pan", next);
    show(next);
  },
  zoom: (next) => {
    tell("zoom", next);
    show(next);
  },
  step: (steps) => {
    tell("step", steps);
    show(steppedBy(plane, steps, grid));
  },
  cursor: (place) => {
    tell("cursor", place);
    section.show({ cursor: place.at });
  },
  dragStart: (hit: SectionHit) => tell("dragStart", hit),
  dragMove: (hit: SectionHit, place) => tell("dragMove", { hit, at: place.at }),
  dragEnd: (hit: SectionHit, _place, cancelled) => tell("dragEnd", { hit, cancelled }),
  resized: () => show(plane),
});
const space = new SpaceView(document.getElementById("space")!, {
  click: (hit) => tell("space click", hit),
});
const strip = new StripView(document.getElementById("strip")!, {
  place: (at) => {
    tell("strip place", at);
    strip.show({ position: at });
  },
  turn: (deg) => {
    tell("strip turn", deg);
    strip.show({ turn: deg });
  },
  resized: () => fillStrip(),
});

const curve = trees.curves.get("c1")!;
const points: Vec3[] = [];
for (let i = 0; i + 2 < curve.points.length; i += 3) points.push([curve.points[i]!, curve.points[i + 1]!, curve.points[i + 2]!]);
const at = arcLengths(points);
const lengthMm = at[at.length - 1]!;
function fillStrip() {
  const { strip: size, film } = strip.sizes;
  const body = new Uint8Array(size.width * size.height);
  for (let y = 0; y < size.height; y++)
    for (let x = 0; x < size.width; x++) {
      const off = Math.abs((x / size.width - 0.5) * 3);
      body[y * size.width + x] = off < 0.45 * (0.6 + (0.4 * y) / size.height) ? 195 : 40 + ((x * 31 + y * 17) % 19);
    }
  const filmBody = new Uint8Array(film.count * film.side * film.side);
  for (let i = 0; i < filmBody.length; i++) {
    const x = i % film.side;
    const y = Math.floor(i / film.side) % film.side;
    filmBody[i] = Math.hypot(x - film.side / 2, y - film.side / 2) < film.side * 0.22 ? 200 : 45;
  }
  strip.show({
    image: { header: { dtype: "uint8", ...size, lengthMm }, body },
    film: {
      header: {
        dtype: "uint8",
        count: film.count,
        side: film.side,
        at: Array.from({ length: film.count }, (_, k) => (lengthMm * (k + 0.5)) / film.count),
      },
      body: filmBody,
    },
  });
}

section.show({
  document: trees,
  selection: { strand: "s1", tree: "t1" },
  frame: "LPS",
  caption: "slab 0.4 mm, maximum",
  underWay: { tree: null, pins: [pointMm(6, 8, 9), pointMm(8.2, 7.4, 9.1)], curves: [[6, 8, 9, 7, 7.4, 9, 8.2, 7.4, 9.1]] },
  guide: {
    points: [8.2, 7.4, 9.1, 9, 7.5, 9, 9.8, 7.9, 9, 10.6, 8.6, 9, 11.4, 8.7, 9],
    coarse: false,
    imageFit: 0.7,
    doubtful: [[2, 3]],
  },
  snap: { point: pointMm(11.4, 8.7, 9.13), depthMm: 0.13, strength: 0.9 },
  ruler: { from: pointMm(5.5, 12, 9), to: pointMm(8.7, 13.2, 9) },
});
space.show({
  document: trees,
  selection: { strand: "s1" },
  surface: surfaceOf(trees),
  bounds: { centre: pointMm(10, 10, 10), radiusMm: 14 },
  guide: [8.2, 7.4, 9.1, 9, 7.5, 9, 9.8, 7.9, 9],
  pins: [pointMm(6, 8, 9), pointMm(8.2, 7.4, 9.1)],
});
strip.show({
  title: "ALPM-01 s1",
  lengthMm,
  at: Float64Array.from(at),
  radii: curve.radii,
  imageFit: curve.imageFit,
  doubtful: [[2.1, 3.4]],
  pins: [lengthMm / 3],
  position: lengthMm * 0.4,
  topWord: "fork",
  bottomWord: "origin",
});
Object.assign(window, { views: { section, space, strip, told, trees, show, plane: () => plane } });
