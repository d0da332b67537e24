import { writeFile } from "node:fs/promises";
import { join } from "node:path";

type Point = readonly [number, number, number];

/** A tree with two forks in one plane: a trunk, a branch to the left, and a second fork above it. Millimetres. */
export const SPACING_MM = 0.06;
export const SIZE = [110, 120, 40] as const;
const Z = 1.2;
const at = (x: number, y: number): Point => [x, y, Z];

export const TRUE_NODES = {
  origin: at(3.3, 6.3),
  low: at(3.3, 4.4),
  left: at(1.2, 2.6),
  high: at(4.2, 2.7),
  middle: at(3.6, 0.9),
  right: at(5.6, 1.2),
} as const;
type NodeName = keyof typeof TRUE_NODES;

/** Strands as polylines with a radius; a bend between nodes, as strings have. */
export const TRUE_STRANDS: readonly {
  readonly from: NodeName;
  readonly to: NodeName;
  readonly radius: number;
  readonly bend: Point;
}[] = [
  { from: "origin", to: "low", radius: 0.3, bend: at(3.22, 5.3) },
  { from: "low", to: "left", radius: 0.2, bend: at(2.1, 3.7) },
  { from: "low", to: "high", radius: 0.24, bend: at(3.95, 3.5) },
  { from: "high", to: "middle", radius: 0.17, bend: at(3.75, 1.8) },
  { from: "high", to: "right", radius: 0.17, bend: at(5.05, 1.8) },
];

/** Points along a strand: a quadratic curve through its bend. */
export function strandPoints({ from, to, bend }: (typeof TRUE_STRANDS)[number], pieces = 40): Point[] {
  const a = TRUE_NODES[from];
  const b = TRUE_NODES[to];
  return Array.from({ length: pieces + 1 }, (_, i) => {
    const t = i / pieces;
    const value = (axis: 0 | 1 | 2) => {
      const control = 2 * bend[axis] - (a[axis] + b[axis]) / 2;
      return (1 - t) * (1 - t) * a[axis] + 2 * t * (1 - t) * control + t * t * b[axis];
    };
    return [value(0), value(1), value(2)];
  });
}

function distanceToSegment(p: Point, a: Point, b: Point): number {
  const d = [b[0] - a[0], b[1] - a[1], b[2] - a[2]] as const;
  const squared = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
  const along = squared === 0 ? 0 : ((p[0] - a[0]) * d[0] + (p[1] - a[1]) * d[1] + (p[2] - a[2]) * d[2]) / squared;
  const t = Math.min(1, Math.max(0, along));
  return Math.hypot(p[0] - a[0] - t * d[0], p[1] - a[1] - t * d[1], p[2] - a[2] - t * d[2]);
}

/** Writes the scan as an attached raw NRRD, voxel centres at multiples of the spacing; edges fall off over one voxel. */
export async function writeSmallScan(folder: string): Promise<string> {
  const [nx, ny, nz] = SIZE;
  const voxels = new Uint16Array(nx * ny * nz);
  const segments = TRUE_STRANDS.flatMap((strand) => {
    const points = strandPoints(strand, 16);
    return points.slice(1).map((end, i) => ({ a: points[i]!, b: end, radius: strand.radius }));
  });
  const inside = new Float32Array(voxels.length);
  for (const { a, b, radius } of segments) {
    const range = (axis: 0 | 1 | 2, size: number) => {
      const reach = radius + 2 * SPACING_MM;
      const first = Math.max(0, Math.floor((Math.min(a[axis], b[axis]) - reach) / SPACING_MM));
      const last = Math.min(size - 1, Math.ceil((Math.max(a[axis], b[axis]) + reach) / SPACING_MM));
      return [first, last] as const;
    };
    const [x0, x1] = range(0, nx);
    const [y0, y1] = range(1, ny);
    const [z0, z1] = range(2, nz);
    for (let z = z0; z <= z1; z++) {
      for (let y = y0; y <= y1; y++) {
        for (let x = x0; x <= x1; x++) {
          const p: Point = [x * SPACING_MM, y * SPACING_MM, z * SPACING_MM];
          const edge = Math.min(1, (radius - distanceToSegment(p, a, b)) / SPACING_MM + 0.5);
          const i = (z * ny + y) * nx + x;
          if (edge > inside[i]!) inside[i] = edge;
        }
      }
    }
  }
  // A small generator with a fixed seed: the same noise each time.
  let seed = 12_345;
  for (let i = 0; i < voxels.length; i++) {
    seed = (Math.imul(seed, 1_664_525) + 1_013_904_223) >>> 0;
    voxels[i] = Math.round(1000 + 2000 * inside[i]! + 120 * (seed / 2 ** 32 - 0.5));
  }
  const header = [
    "NRRD0004",
    "type: uint16",
    "dimension: 3",
    "space: left-posterior-superior",
    `sizes: ${nx} ${ny} ${nz}`,
    `space directions: (${SPACING_MM},0,0) (0,${SPACING_MM},0) (0,0,${SPACING_MM})`,
    "space origin: (0,0,0)",
    'space units: "mm" "mm" "mm"',
    "endian: little",
    "encoding: raw",
    "",
    "",
  ].join("\n");
  const path = join(folder, "small-tree.nrrd");
  await writeFile(path, Buffer.concat([Buffer.from(header, "latin1"), Buffer.from(voxels.buffer)]));
  return path;
}

/** Writes the true tree as a tree file, by hand: no code of the program takes part. */
export async function writeTrueTree(folder: string): Promise<string> {
  const kinds: Readonly<Record<NodeName, string>> = {
    origin: "origin",
    low: "fork",
    left: "insertion",
    high: "fork",
    middle: "insertion",
    right: "insertion",
  };
  const nodes = Object.entries(TRUE_NODES).map(([id, position]) => ({ id, kind: kinds[id as NodeName], position }));
  const strands = TRUE_STRANDS.map((strand, i) => {
    const points = strandPoints(strand);
    return { id: `s${i + 1}`, from: strand.from, to: strand.to, points, radii: points.map(() => strand.radius) };
  });
  const file = {
    format: "chordae-trees",
    version: 1,
    unit: "mm",
    frame: "LPS",
    volume: null,
    trees: [{ id: "t1", name: "TREE-01", root: "origin", nodes, strands }],
  };
  const path = join(folder, "true.chordae.json");
  await writeFile(path, JSON.stringify(file));
  return path;
}
