import type { FileLine, FileTree, NodeLabels } from "#shared/formats/chordae/chordae-file.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, distance as distanceOf, mix, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { PlannedEnd, PlannedFork, PlannedPart, PlannedTree } from "#shared/phantom/grow-tree.ts";
import type { Plot } from "#shared/phantom/plant.ts";
import { stringCurve, taperedRadii } from "#shared/phantom/string-curve.ts";
import {
  HEADS,
  LEAFLET_THICKNESS,
  type LeafletSide,
  leafletAt,
  type MuscleHead,
  ventricularSide,
  wallAt,
} from "#shared/phantom/valve-shape.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";
import type { Muscle, Segment } from "#shared/trees/document.ts";
import { NAME_PREFIX } from "#shared/trees/names.ts";

/** Where two strands of different trees touch on purpose. */
export interface Crossing {
  readonly at: Vec3;
  /** The two strands, by id. */
  readonly strands: readonly [string, string];
}

/** A place on a leaflet by its parameters, and the radius of the string that ends there, millimetres. */
type Target = readonly [side: LeafletSide, across: number, down: number, radius: number];

/** Ends in nested brackets: ends in one bracket part at one fork. `share` of the way, `radius` at the fork. */
interface Group {
  readonly share: number;
  readonly radius: number;
  readonly parts: readonly (Target | Group)[];
}

interface Design {
  readonly head: number;
  readonly radius: number;
  readonly strut?: true;
  readonly top: Target | Group;
}

const fork = (share: number, radius: number, ...parts: (Target | Group)[]): Group => ({ share, radius, parts });

/** Trees of one muscle, `across` counted from the middle of the valve; the other muscle's are mirrored, on its own heads. */
const DESIGNS: readonly Design[] = [
  { head: 1, radius: 1, strut: true, top: fork(0.76, 0.85, ["anterior", 0.36, 0.6, 0.55], ["anterior", 0.5, 0.6, 0.5]) },
  {
    head: 1,
    radius: 0.45,
    top: fork(
      0.55,
      0.38,
      ["anterior", 0.08, 1, 0.11],
      fork(0.45, 0.28, ["anterior", 0.16, 0.86, 0.17], ["anterior", 0.25, 1, 0.12]),
    ),
  },
  {
    head: 1,
    radius: 0.5,
    top: fork(0.6, 0.42, ["anterior", 0.61, 1, 0.12], ["anterior", 0.67, 0.85, 0.22], ["anterior", 0.74, 1, 0.1]),
  },
  {
    head: 2,
    radius: 0.4,
    top: fork(0.55, 0.34, ["anterior", 0.93, 1, 0.13], ["posterior", 0.97, 0.9, 0.15], ["posterior", 0.9, 1, 0.12]),
  },
  {
    head: 2,
    radius: 0.45,
    top: fork(0.6, 0.38, ["posterior", 0.61, 1, 0.12], ["posterior", 0.68, 0.86, 0.22], ["posterior", 0.76, 1, 0.11]),
  },
  {
    head: 2,
    radius: 0.42,
    top: fork(
      0.5,
      0.36,
      ["posterior", 0.05, 1, 0.1],
      fork(0.3, 0.26, ["posterior", 0.13, 0.86, 0.17], ["posterior", 0.21, 1, 0.13]),
    ),
  },
  {
    head: 2,
    radius: 0.5,
    top: fork(
      0.5,
      0.4,
      fork(0.3, 0.26, ["posterior", 0.33, 1, 0.13], ["posterior", 0.38, 0.86, 0.18]),
      fork(0.5, 0.24, ["posterior", 0.45, 1, 0.11], ["posterior", 0.51, 0.88, 0.14]),
    ),
  },
  { head: 1, radius: 0.2, top: fork(0.62, 0.16, ["anterior", 0.82, 1, 0.1], ["anterior", 0.88, 0.9, 0.075]) },
];

const isGroup = (part: Target | Group): part is Group => "parts" in part;

/** Plants the trees of the valve: both muscles' by design, a wall-born one each, a torn one, a false one, and a cross-link. */
export function plantValve(plot: Plot, random: SeededRandom, step: number): { crossing: Crossing; crossLinks: FileLine[] } {
  const counts: Record<Muscle, number> = { "antero-lateral": 0, "postero-medial": 0 };
  const name = (muscle: Muscle) => {
    counts[muscle] += 1;
    return `${NAME_PREFIX[muscle]}-${String(counts[muscle]).padStart(2, "0")}`;
  };
  const planted = new Map<string, FileTree>();
  for (const muscle of ["antero-lateral", "postero-medial"] as const) {
    const sign = muscle === "antero-lateral" ? 1 : -1;
    const heads = HEADS.filter((head) => head.muscle === muscle);
    const touch = touchOf(DESIGNS[5]!, DESIGNS[6]!, sign, heads, muscle === "antero-lateral");
    const touching = [`${NAME_PREFIX[muscle]}-06`, `${NAME_PREFIX[muscle]}-07`] as const;
    plot.touches.push({ trees: touching, at: touch.at, reach: 4 });
    DESIGNS.forEach((design, k) => {
      const own = name(muscle);
      const head = headFor(heads, design, k);
      const routes = k === 5 ? touch.first : k === 6 ? touch.second : undefined;
      const top = partOf(design.top, sign, routes);
      const plan = (r: SeededRandom) => fromHead(own, head, design.radius, top, design.strut, r);
      const { tree } = plot.plant(plan, 0.035);
      planted.set(own, tree);
      embedEnds(plot, tree, head.centre, top);
    });
    const wall = name(muscle);
    const turn = Math.PI / 2 - sign * 0.5;
    const top = partOf(["posterior", 0.56, 0.36, 0.4], sign);
    const { tree } = plot.plant((r) => fromWall(wall, muscle, wallAt(turn + r.between(-0.05, 0.05), 6.6), top), 0.02);
    embedEnds(plot, tree, add(tree.nodes[0]!.position, scale(wallAt(turn, 0), 0.1)), top);
    const special = name(muscle);
    const last = muscle === "antero-lateral" ? tornTree(plot, special, heads[1]!, sign) : falseTree(plot, special, heads[2]!);
    planted.set(special, last);
  }
  const strands = [strandTo(planted.get("ALPM-06")!, 2), strandTo(planted.get("ALPM-07")!, 0)] as const;
  const crossing = { at: meetingPlace(strands[0].points!, strands[1].points!), strands: [strands[0].id, strands[1].id] as const };
  return { crossing, crossLinks: [crossLink(plot, planted.get("ALPM-04")!, planted.get("ALPM-05")!, random, step)] };
}

/** Heads share the work: designs of a muscle's second head go on to its third where it has one. */
function headFor(heads: readonly MuscleHead[], design: Design, k: number): MuscleHead {
  if (design.head === 2 && heads.length > 2 && k !== 3) return heads[2]!;
  return heads[design.head - 1]!;
}

function partOf(part: Target | Group, sign: number, routes?: ReadonlyMap<number, Partial<PlannedEnd>>): PlannedPart {
  if (isGroup(part))
    return { share: part.share, radius: part.radius, parts: part.parts.map((child) => partOf(child, sign, routes)) };
  const end = endAt(part, sign);
  return { ...end, ...routes?.get(part[1]) };
}

/** Where the string of a target ends: the last cross-section that is separate from the leaflet. */
function endAt([side, across, down, radius]: Target, sign: number): PlannedEnd {
  const u = across * sign;
  const out = ventricularSide(side, u, down);
  const at = add(leafletAt(side, u, down), scale(out, LEAFLET_THICKNESS / 2 + 0.05));
  return { at, radius, labels: insertionLabels(side, u, down), arrive: normalise(add(scale(out, -0.7), [0, 0, 0.8])) };
}

function insertionLabels(side: LeafletSide, across: number, down: number): NodeLabels {
  const zone = down > 0.95 ? "free-edge" : down > 0.5 ? "rough" : "base";
  if (Math.abs(across) > 0.86) return { kind: "insertion", leaflet: "commissure", segment: across > 0 ? "AC" : "PC", zone };
  const third = across > 0.33 ? 1 : across < -0.33 ? 3 : 2;
  const segment = `${side === "anterior" ? "A" : "P"}${third}` as Segment;
  return { kind: "insertion", leaflet: side, segment, zone, cleft: false };
}

function fromHead(
  name: string,
  head: MuscleHead,
  radius: number,
  top: PlannedPart,
  strut: true | undefined,
  random: SeededRandom,
): PlannedTree {
  const target = meanOf(top);
  const towards = normalise([target[0] - head.centre[0], target[1] - head.centre[1], 0]);
  // A strut takes the middle of its head; the others find a place beside it.
  const wide = strut ? 0.2 : 0.9;
  const spread: Vec3 = [random.between(-wide, wide), random.between(-wide, wide), 0];
  const direction = normalise(add(add(scale(towards, strut ? 0.1 : 0.4), spread), [0, 0, 1]));
  return {
    name,
    origin: add(head.centre, scale(direction, head.radius + 0.15)),
    originLabels: { site: "head", muscle: head.muscle, head: head.head },
    leave: normalise(add(direction, normalise(subtract(target, head.centre)))),
    radius,
    top,
    ...(strut && { strut }),
  };
}

function fromWall(name: string, muscle: Muscle, origin: Vec3, top: PlannedPart): PlannedTree {
  const leave = normalise(add(scale([origin[0], origin[1], 0], -0.06), [0, 0, 1]));
  return { name, origin, originLabels: { site: "wall", muscle }, leave, radius: 0.48, top };
}

/** A tree of which one branch is torn and hangs free. */
function tornTree(plot: Plot, name: string, head: MuscleHead, sign: number): FileTree {
  const held = endAt(["posterior", 0.83, 1, 0.13], sign);
  const torn: PlannedEnd = {
    at: [11.2 * sign, 6.6, 19.4],
    radius: 0.14,
    labels: { kind: "ruptured" },
    arrive: normalise([0.5 * sign, 0.8, -0.7]),
  };
  const top: PlannedFork = { share: 0.4, radius: 0.3, at: [10 * sign, 5.2, 15.4], parts: [held, torn] };
  const { tree } = plot.plant((r) => fromHead(name, head, 0.36, top, undefined, r), 0.03);
  embedEnds(plot, tree, head.centre, top);
  return tree;
}

/** A false chorda: from a muscle head to the wall. */
function falseTree(plot: Plot, name: string, head: MuscleHead): FileTree {
  const at = wallAt(Math.PI * 0.79, 5.2);
  const end: PlannedEnd = {
    at: scale(at, 0.985),
    radius: 0.22,
    labels: { kind: "wall-end" },
    arrive: normalise([at[0], at[1], 0]),
  };
  const plan = (r: SeededRandom): PlannedTree => {
    const direction = normalise([r.between(-0.3, 0.3), 1, r.between(0.1, 0.5)]);
    return {
      name,
      origin: add(head.centre, scale(direction, head.radius + 0.15)),
      originLabels: { site: "head", muscle: head.muscle, head: head.head },
      leave: direction,
      radius: 0.3,
      top: end,
    };
  };
  const { tree } = plot.plant(plan, 0.04);
  plot.embed(end.at, end.arrive!, 0.8, end.radius);
  plot.embed(tree.nodes[0]!.position, normalise(subtract(head.centre, tree.nodes[0]!.position)), 1, 0.3);
  return tree;
}

/** The strings go on into what they grow from and insert into. */
function embedEnds(plot: Plot, tree: FileTree, core: Vec3, top: PlannedPart): void {
  const origin = tree.nodes[0]!.position;
  plot.embed(origin, normalise(subtract(core, origin)), 1, tree.strands[0]!.radii![0]!);
  for (const end of ends(top)) if (end.labels.kind === "insertion") plot.embed(end.at, end.arrive!, 0.45, end.radius);
}

function ends(part: PlannedPart): PlannedEnd[] {
  return "parts" in part ? part.parts.flatMap(ends) : [part];
}

function meanOf(part: PlannedPart): Vec3 {
  const list = ends(part);
  return scale(
    list.reduce<Vec3>((sum, end) => add(sum, end.at), [0, 0, 0]),
    1 / list.length,
  );
}

type Routes = ReadonlyMap<number, Partial<PlannedEnd>>;

/**
 * Two neighbouring end strands that touch: they cross and end in each other's place, or run side by side for 2 mm. Both ways
 * their axes are as far apart as their radii together.
 */
function touchOf(
  a: Design,
  b: Design,
  sign: number,
  heads: readonly MuscleHead[],
  crosses: boolean,
): { at: Vec3; first: Routes; second: Routes } {
  const ta = lastTargets(a.top).at(-1)!;
  const tb = lastTargets(b.top)[0]!;
  const goalA = endAt(crosses ? tb : ta, sign);
  const goalB = endAt(crosses ? ta : tb, sign);
  const start = heads[Math.min(heads.length, 3) - 1]!.centre;
  const at = mix(start, mix(goalA.at, goalB.at, 0.5), 0.82);
  const apart = normalise(crosses ? cross(subtract(goalA.at, goalB.at), subtract(at, start)) : subtract(goalA.at, goalB.at));
  // The strings thin out from 1.15 of their last radius; here they are half way.
  const half = (ta[3] + tb[3]) * 1.07 * 0.5;
  const up = normalise(subtract(mix(goalA.at, goalB.at, 0.5), start));
  // Side by side they come together and part gently, or each would swing through the other.
  const course = crosses
    ? [[0, 1] as const]
    : ([
        [-1.6, 2.2],
        [-0.7, 1],
        [0.7, 1],
        [1.6, 2.2],
      ] as const);
  const through = (side: number) => course.map(([s, wide]) => add(add(at, scale(up, s)), scale(apart, side * wide * half)));
  const { labels: labelsA, at: endA, arrive: arriveA } = goalA;
  const { labels: labelsB, at: endB, arrive: arriveB } = goalB;
  return {
    at,
    first: new Map([[ta[1], { at: endA, labels: labelsA, ...(arriveA && { arrive: arriveA }), through: through(1) }]]),
    second: new Map([[tb[1], { at: endB, labels: labelsB, ...(arriveB && { arrive: arriveB }), through: through(-1) }]]),
  };
}

function lastTargets(part: Target | Group): Target[] {
  return isGroup(part) ? part.parts.flatMap(lastTargets) : [part];
}

/** The strand to the `k`-th end of a tree. */
function strandTo(tree: FileTree, k: number): FileTree["strands"][number] {
  const leaves = tree.nodes.filter((node) => node.kind !== "fork" && node.kind !== "origin");
  return tree.strands.find((strand) => strand.to === leaves[k]!.id)!;
}

/** The place half way between two lines where they come nearest to each other. */
export function meetingPlace(a: readonly Vec3[], b: readonly Vec3[]): Vec3 {
  let best: Vec3 = a[0]!;
  let least = Number.POSITIVE_INFINITY;
  for (const p of a) {
    for (const q of b) {
      const d = distanceOf(p, q);
      if (d < least) {
        least = d;
        best = mix(p, q, 0.5);
      }
    }
  }
  return best;
}

/** A thin string that joins the forks of two trees. */
function crossLink(plot: Plot, a: FileTree, b: FileTree, random: SeededRandom, step: number): FileLine {
  const from = a.nodes.find((node) => node.kind === "fork")!;
  const to = b.nodes.find((node) => node.kind === "fork")!;
  const points = stringCurve(from.position, to.position, { sway: 0.02, step }, random);
  const radii = taperedRadii(points, 0.14, 0.12);
  plot.solids.addTube("string", points, radii);
  plot.clearance.occupy("x1", points, radii);
  return { id: "x1", from: from.id, to: to.id, points, radii };
}
