import type { NodeLabels } from "#shared/formats/chordae/chordae-file.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, mix, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { PlannedEnd, PlannedFork, PlannedPart, PlannedTree } from "#shared/phantom/grow-tree.ts";
import { type PhantomSpecimen, truthFile } from "#shared/phantom/phantom-specimen.ts";
import { LEAFLET, MUSCLE, Plot } from "#shared/phantom/plant.ts";
import { scanOfSolids } from "#shared/phantom/render-scan.ts";
import { lookOf, PHANTOM_FACTS } from "#shared/phantom/scan-look.ts";
import { Solids } from "#shared/phantom/solids.ts";
import { type Crossing, meetingPlace } from "#shared/phantom/valve-trees.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { Landmarks, Muscle, Segment } from "#shared/trees/document.ts";
import { NAME_PREFIX } from "#shared/trees/names.ts";
import { plainGrid } from "#shared/volume/grid.ts";

/** Below these a tree does not find room for strings of the least thickness. */
export const LEAST_SIDE_VOXELS = 64;
const LEAST_CELL_VOXELS = 32;

/** Trees that a block of this size has room for. */
export function mostTrees(size: readonly [number, number, number]): number {
  return Math.floor(size[0] / LEAST_CELL_VOXELS) * Math.floor(size[1] / LEAST_CELL_VOXELS);
}

/** Where things stand in a block, millimetres. */
interface Layout {
  readonly size: Vec3;
  /** Cells across and back. */
  readonly cells: readonly [number, number];
  readonly cell: readonly [number, number];
  /** The smaller side of a cell; radii are shares of it. */
  readonly unit: number;
  /** Radius that no string is below: a scan shows it two voxels wide. */
  readonly thinnest: number;
  readonly leaflet: { readonly z: number; readonly thickness: number };
}

/**
 * A block cut out of an invented valve: trees in cells side by side, each from its own muscle head below to a leaflet above, two
 * neighbours crossing where there are two or more. Depends on its options alone.
 * @param options.size voxels, every side at least {@link LEAST_SIDE_VOXELS}. @param options.trees 1 to {@link mostTrees}.
 * @param options.noise standard deviation as a share of a string's contrast.
 */
export function blockPhantom(options: {
  readonly name: string;
  readonly seed: number;
  readonly size: readonly [number, number, number];
  readonly spacingMm: number;
  readonly trees: number;
  readonly noise: number;
}): PhantomSpecimen {
  const { name, seed, size, spacingMm, trees, noise } = options;
  const random = new SeededRandom(seed);
  const grid = plainGrid(size, [spacingMm, spacingMm, spacingMm]);
  const layout = layoutOf(size, spacingMm, trees);
  const solids = new Solids();
  const plot = new Plot(solids, random, spacingMm, 2.5 * spacingMm, 0.3 * layout.unit, 0.3 * layout.unit);
  addBody(solids, plot, layout, trees);
  const touch = trees > 1 ? crossingOf(layout) : undefined;
  if (touch) plot.touches.push({ trees: [treeName(layout, 0), treeName(layout, 1)], at: touch.at, reach: 0.35 * layout.unit });
  for (let k = 0; k < trees; k++) {
    const crossingEnd = touch && k < 2 ? touch.ends[k as 0 | 1] : undefined;
    // Which ends a tree has is settled once; only where its strings run changes from trial to trial.
    const shape = shapeOf(layout, k, crossingEnd, random);
    const { tree } = plot.plant((r) => planOf(layout, k, shape, r), 0.05);
    plot.embed(tree.nodes[0]!.position, [0, 0, -1], 0.08 * layout.size[2], tree.strands[0]!.radii![0]!);
    for (const node of tree.nodes) {
      const last = tree.strands.find((strand) => strand.to === node.id)?.radii?.at(-1);
      if (node.kind === "insertion" && last) plot.embed(node.position, [0, 0, 1], 0.7 * layout.leaflet.thickness, last);
    }
  }
  const blurFwhmMm = 1.75 * spacingMm;
  const about = { name, grid, blurFwhmMm, facts: PHANTOM_FACTS, landmarks: landmarksOf(layout, trees) };
  return {
    ...about,
    dtype: "uint16",
    renderSlab: scanOfSolids(grid, solids.lists(), lookOf(seed, noise, blurFwhmMm)),
    truth: truthFile(about, plot.trees, []),
    crossings: touch ? [crossingIn(plot)] : [],
  };
}

function layoutOf(voxels: readonly [number, number, number], spacingMm: number, trees: number): Layout {
  const size: Vec3 = [voxels[0] * spacingMm, voxels[1] * spacingMm, voxels[2] * spacingMm];
  // Of all ways to lay out the cells, the one whose cells are nearest to squares.
  let cells: [number, number] = [trees, 1];
  let best = 0;
  for (let across = 1; across <= trees; across++) {
    const back = Math.ceil(trees / across);
    const least = Math.min(size[0] / across, size[1] / back);
    // Trees 1 and 2 cross, so they need to be neighbours in one row.
    if (least > best + 1e-9 && (across > 1 || trees === 1)) {
      best = least;
      cells = [across, back];
    }
  }
  const cell = [size[0] / cells[0], size[1] / cells[1]] as const;
  const unit = Math.min(cell[0], cell[1], 0.5 * size[2]);
  return {
    size,
    cells,
    cell,
    unit,
    thinnest: spacingMm,
    leaflet: { z: 0.88 * size[2], thickness: Math.max(0.04 * size[2], 4 * spacingMm) },
  };
}

/** Middle of a tree's cell. */
function middleOf(layout: Layout, k: number): readonly [number, number] {
  const [across] = layout.cells;
  return [((k % across) + 0.5) * layout.cell[0], (Math.floor(k / across) + 0.5) * layout.cell[1]];
}

function muscleOf(layout: Layout, k: number): Muscle {
  // The left of the body is at positive x, where the antero-lateral muscle stands.
  return middleOf(layout, k)[0] >= layout.size[0] / 2 - 1e-9 ? "antero-lateral" : "postero-medial";
}

function treeName(layout: Layout, k: number): string {
  const muscle = muscleOf(layout, k);
  const number = Array.from({ length: k + 1 }, (_, i) => muscleOf(layout, i)).filter((other) => other === muscle).length;
  return `${NAME_PREFIX[muscle]}-${String(number).padStart(2, "0")}`;
}

const HEAD_TOP = 0.2;

function addBody(solids: Solids, plot: Plot, layout: Layout, trees: number): void {
  const { size, unit, leaflet } = layout;
  const corners = (z: number): Vec3[][] => [
    [
      [-1, -1, z],
      [-1, size[1] + 1, z],
    ],
    [
      [size[0] + 1, -1, z],
      [size[0] + 1, size[1] + 1, z],
    ],
  ];
  solids.addSheet("muscle", corners(0), 0.12 * size[2]);
  for (let k = 0; k < trees; k++) {
    const [x, y] = middleOf(layout, k);
    const points: Vec3[] = [
      [x, y, 0],
      [x, y, HEAD_TOP * size[2] - 0.12 * unit],
    ];
    const radii = [0.26 * unit, 0.12 * unit];
    solids.addTube("muscle", points, radii);
    plot.clearance.occupy(MUSCLE, points, radii);
  }
  const steps = 24;
  const rows = Array.from({ length: steps + 3 }, (_, i) =>
    Array.from({ length: steps + 3 }, (_, j): Vec3 => {
      const x = ((i - 1) / steps) * size[0];
      const y = ((j - 1) / steps) * size[1];
      return [x, y, leafletZ(layout, x, y)];
    }),
  );
  solids.addSheet("leaflet", rows, leaflet.thickness);
  for (const row of rows)
    plot.clearance.occupy(
      LEAFLET,
      row,
      row.map(() => leaflet.thickness / 2),
    );
}

/** Height of the leaflet's middle surface: gently waved. */
function leafletZ(layout: Layout, x: number, y: number): number {
  const [sx, sy, sz] = layout.size;
  return layout.leaflet.z + 0.015 * sz * Math.sin((2 * Math.PI * x) / sx + 0.6) * Math.cos((2 * Math.PI * y) / sy);
}

function endAt(layout: Layout, x: number, y: number, radius: number): PlannedEnd {
  const share = x / layout.size[0];
  const third = share > 2 / 3 ? 1 : share > 1 / 3 ? 2 : 3;
  const anterior = y < layout.size[1] / 2;
  const labels: NodeLabels = {
    kind: "insertion",
    leaflet: anterior ? "anterior" : "posterior",
    segment: `${anterior ? "A" : "P"}${third}` as Segment,
    zone: "rough",
    cleft: false,
  };
  const z = leafletZ(layout, x, y) - layout.leaflet.thickness / 2 - 0.01 * layout.size[2];
  return { at: [x, y, z], radius, labels, arrive: [0, 0, 1] };
}

/** What a tree is like, whatever its exact course: its ends, in the order of their directions, and how it parts. */
interface Shape {
  readonly ends: readonly PlannedEnd[];
  readonly radius: number;
}

function shapeOf(layout: Layout, k: number, crossing: PlannedEnd | undefined, random: SeededRandom): Shape {
  const [x, y] = middleOf(layout, k);
  const { unit } = layout;
  const count = 2 + random.below(3);
  const ends: PlannedEnd[] = [];
  // The crossing branch leaves towards the neighbour; the others share the remaining directions.
  const towards = crossing ? (crossing.at[0] > x ? 0 : Math.PI) : random.between(0, 2 * Math.PI);
  const free = crossing ? (2 * Math.PI * 0.62) / count : (2 * Math.PI) / count;
  const first = crossing ? towards + Math.PI - (free * (count - 1)) / 2 : towards;
  for (let i = 0; i < count; i++) {
    const angle = first + free * (i + random.between(-0.12, 0.12));
    const far = unit * random.between(0.24, 0.36);
    const thin = i === count - 1 ? 0.02 : random.between(0.025, 0.035);
    ends.push(endAt(layout, x + far * Math.cos(angle), y + far * Math.sin(angle), Math.max(thin * unit, layout.thinnest)));
  }
  if (crossing) ends.push(crossing);
  return { ends, radius: Math.max(unit * random.between(0.06, 0.075), 2 * layout.thinnest) };
}

function planOf(layout: Layout, k: number, shape: Shape, random: SeededRandom): PlannedTree {
  const [x, y] = middleOf(layout, k);
  const origin: Vec3 = [x, y, HEAD_TOP * layout.size[2] + 0.02 * layout.unit];
  const lean = 0.03 * layout.unit;
  const low: Vec3 = [
    x + random.between(-lean, lean),
    y + random.between(-lean, lean),
    layout.size[2] * random.between(0.4, 0.46),
  ];
  const { ends, radius } = shape;
  const top = ends.length > 2 ? laterFork(ends, low, radius) : fork(low, 0.8 * radius, ends);
  return {
    name: treeName(layout, k),
    origin,
    originLabels: { site: "head", muscle: muscleOf(layout, k), head: k + 1 },
    leave: [0, 0, 1],
    radius,
    top,
  };
}

function fork(at: Vec3, radius: number, parts: readonly PlannedPart[]): PlannedFork {
  return { share: 0.5, at, radius, parts };
}

/** Neighbouring ends part from each other higher up, on the way to their middle. */
function laterFork(ends: readonly PlannedEnd[], low: Vec3, radius: number): PlannedFork {
  const pair = ends.slice(0, 2);
  const middle = mix(pair[0]!.at, pair[1]!.at, 0.5);
  return fork(low, 0.8 * radius, [fork(mix(low, middle, 0.42), 0.6 * radius, pair), ...ends.slice(2)]);
}

/** Where the first two trees cross: at the wall between their cells, each ending beyond it, axes a sum of radii apart. */
function crossingOf(layout: Layout): { at: Vec3; ends: readonly [PlannedEnd, PlannedEnd] } {
  const [ax, ay] = middleOf(layout, 0);
  const [bx] = middleOf(layout, 1);
  const wall = (ax + bx) / 2;
  const at: Vec3 = [wall, ay, 0.68 * layout.size[2]];
  const radius = Math.max(0.027 * layout.unit, layout.thinnest);
  const apart = 1.05 * radius * 1.08;
  const beyond = 0.1 * layout.cell[0];
  const reach = (x: number, side: number): PlannedEnd => {
    const end = endAt(layout, x, ay + side * apart, radius);
    const through: Vec3 = [at[0], at[1] + side * apart, at[2]];
    return { ...end, through: [through], arrive: normalise(add(scale(subtract(end.at, through), 0.5), [0, 0, 1])) };
  };
  return { at, ends: [reach(wall + beyond, -1), reach(wall - beyond, 1)] };
}

function crossingIn(plot: Plot): Crossing {
  const [a, b] = [plot.trees[0]!, plot.trees[1]!].map((tree) => tree.strands.at(-1)!) as [
    (typeof plot.trees)[0]["strands"][0],
    (typeof plot.trees)[0]["strands"][0],
  ];
  return { at: meetingPlace(a.points!, b.points!), strands: [a.id, b.id] };
}

function landmarksOf(layout: Layout, trees: number): Landmarks {
  const [sx, sy] = layout.size;
  const rim: [number, number][] = [
    [0, 0],
    [sx, 0],
    [sx, sy],
    [0, sy],
  ];
  return {
    annulus: { closed: true, points: rim.map(([x, y]) => roundPoint([x, y, leafletZ(layout, x, y)])) },
    muscleHeads: Array.from({ length: trees }, (_, k) => {
      const [x, y] = middleOf(layout, k);
      return { muscle: muscleOf(layout, k), head: k + 1, position: roundPoint([x, y, HEAD_TOP * layout.size[2]]) };
    }),
  };
}
