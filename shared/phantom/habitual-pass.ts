import type { ChordaeFile, FileNode, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import { type AnnotatorHabits, type Deviation, SHORT_END_MM } from "#shared/phantom/annotator-habits.ts";
import type { HumanError } from "#shared/phantom/human-passes.ts";
import { withLongEnd, withMovedNodes } from "#shared/phantom/moved-nodes.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
import { nearestIndex } from "#shared/phantom/pins.ts";
import {
  type Branch,
  branchesOf,
  handSway,
  replaceTree,
  withFittingLinks,
  withoutBranch,
  withShortEnd,
  withTail,
} from "#shared/phantom/tree-mistakes.ts";
import type { Crossing } from "#shared/phantom/valve-trees.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { Segment } from "#shared/trees/document.ts";

/** One mistake of a pass; ids are those of the true trees. */
export interface StudyMistake {
  readonly specimen: string;
  readonly annotator: string;
  readonly pass: number;
  readonly event: HumanError["event"] | "wrong-segment";
  readonly tree: string;
  /** Strand of a branch or tail, node of a fork, end or label. */
  readonly item: string;
  readonly at: Vec3;
  /** Millimetres missed, exchanged, moved or short; 0 for a label. */
  readonly amount: number;
}

/** Where each kind of mistake is possible: ids of the true trees. */
export interface Chances {
  /** End strands that can be missed: at each fork all insertions' strands but the thickest child. */
  readonly missable: readonly string[];
  /** End strands long enough to be ended too early. */
  readonly shortable: readonly string[];
  /** Insertions whose segment has a neighbour. */
  readonly nameable: readonly string[];
  readonly crossings: readonly Crossing[];
}

type Source = Pick<PhantomSpecimen, "name" | "truth" | "crossings">;

/** A segment's neighbours on the same leaflet; a commissure's have none. */
const NEIGHBOURS: Readonly<Record<Segment, readonly Segment[]>> = {
  A1: ["A2"],
  A2: ["A1", "A3"],
  A3: ["A2"],
  P1: ["P2"],
  P2: ["P1", "P3"],
  P3: ["P2"],
  AC: [],
  PC: [],
};

/** Where mistakes are possible in a specimen. Strands that cross others are followed wrongly or not at all, but never missed. */
export function chancesOf({ truth, crossings }: Source): Chances {
  const crossed = new Set(crossings.flatMap(({ strands }) => strands));
  const linked = new Set(truth.crossLinks?.flatMap(({ from, to }) => [from, to]));
  const branches = branchesOf(truth.trees);
  const ending = branches.filter(({ to, strand }) => to.kind === "insertion" && !crossed.has(strand.id));
  const thickness = (strand: Branch["strand"]) => strand.radii![0]!;
  const missable = ending.filter(
    ({ strand, siblings, before, from, to }) =>
      before !== undefined &&
      !linked.has(from.id) &&
      !linked.has(to.id) &&
      siblings.some(
        (other) => thickness(other) > thickness(strand) || (thickness(other) === thickness(strand) && other.id < strand.id),
      ),
  );
  return {
    missable: missable.map(({ strand }) => strand.id),
    shortable: ending.filter(({ length }) => length > 2 * SHORT_END_MM).map(({ strand }) => strand.id),
    nameable: branches.flatMap(({ to }) => (to.segment && NEIGHBOURS[to.segment].length > 0 ? [to.id] : [])),
    crossings,
  };
}

/**
 * One pass by an annotator of known habits over a specimen: the tree file and the mistakes that it holds. The same arguments
 * give the same bytes. @param annotatorNumber from 1: annotators err independently of each other. @param created ISO 8601.
 */
export function habitualPass(
  specimen: Source,
  habits: AnnotatorHabits,
  annotatorNumber: number,
  pass: number,
  created: string,
  seed: number,
): { file: ChordaeFile; mistakes: StudyMistake[] } {
  const { truth } = specimen;
  const dice = new Dice(habits, annotatorNumber, pass, seed);
  const chances = chancesOf(specimen);
  const mistakes: StudyMistake[] = [];
  const note = (event: StudyMistake["event"], tree: string, item: string, at: Vec3, amount: number) => {
    mistakes.push({ specimen: specimen.name, annotator: habits.annotator, pass, event, tree, item, at, amount: roundMm(amount) });
  };
  let trees = exchanged(truth.trees, chances.crossings, habits, dice, note);
  trees = trees.map((tree) => withMovedNodes(tree, shiftsOf(tree, habits, dice, note)));
  trees = withEndsSet(trees, new Set(chances.shortable), habits, pass, dice, note);
  for (const id of chances.missable) {
    if (!dice.happens(habits.missed)) continue;
    const branch = branchesOf(trees).find(({ strand }) => strand.id === id)!;
    trees = replaceTree(trees, withoutBranch(branch));
    note("missed-branch", branch.tree.id, id, branch.from.position, branch.length);
  }
  const nameable = new Set(chances.nameable);
  // Labels are drawn for all true ends, so that a missed one does not shift the others' luck.
  const wrong = new Map<string, Segment>();
  for (const node of truth.trees.flatMap((tree) => tree.nodes).filter(({ id }) => nameable.has(id))) {
    const others = NEIGHBOURS[node.segment!];
    const other = others[dice.sameBelow(others.length)]!;
    if (dice.happens(habits.wrongSegments)) wrong.set(node.id, other);
  }
  const sway = handSway(habits.swayMm, dice.passes);
  trees = trees.map((tree) => finished(tree, wrong, sway, habits, dice, note));
  const file: ChordaeFile = {
    ...truth,
    annotator: habits.annotator,
    pass,
    created,
    radii: "blur-corrected",
    trees,
    ...(truth.crossLinks && { crossLinks: truth.crossLinks.map((link) => ({ ...link, points: link.points!.map(sway) })) }),
  };
  return { file: withFittingLinks(file), mistakes };
}

type Note = (event: StudyMistake["event"], tree: string, item: string, at: Vec3, amount: number) => void;

/** Two streams: what is the same in all of an annotator's passes over a specimen, and what this pass adds. */
class Dice {
  readonly passes: SeededRandom;
  readonly #own: SeededRandom;
  readonly #isFirst: boolean;
  readonly #sameAgain: number;

  constructor(habits: AnnotatorHabits, annotatorNumber: number, pass: number, seed: number) {
    this.#own = new SeededRandom(seed, 1000 * annotatorNumber);
    this.passes = new SeededRandom(seed, 1000 * annotatorNumber + pass);
    this.#isFirst = pass === 1;
    this.#sameAgain = habits.sameAgain;
  }

  /** Whether a mistake of this chance is made: in a later pass as in the first, or decided anew. */
  happens(chance: number): boolean {
    const first = this.#own.unit() < chance;
    const [again, anew] = [this.passes.unit(), this.passes.unit() < chance];
    return this.#isFirst || again < this.#sameAgain ? first : anew;
  }

  /** A whole number that is the same in all passes. */
  sameBelow(count: number): number {
    return this.#own.below(count);
  }

  deviates({ own, pass }: Deviation): number {
    return own * this.#own.normal() + pass * this.passes.normal();
  }
}

function exchanged(
  trees: readonly FileTree[],
  crossings: readonly Crossing[],
  habits: AnnotatorHabits,
  dice: Dice,
  note: Note,
): readonly FileTree[] {
  let changed = trees;
  for (const { at, strands } of crossings) {
    if (!dice.happens(habits.exchangedTails)) continue;
    const all = branchesOf(changed);
    const [a, b] = strands.map((id) => all.find(({ strand }) => strand.id === id)!) as [Branch, Branch];
    const [cutA, cutB] = [nearestIndex(a.strand.points!, at), nearestIndex(b.strand.points!, at)];
    changed = replaceTree(replaceTree(changed, withTail(a, b, cutA, cutB)), withTail(b, a, cutB, cutA));
    note("exchanged-tails", a.tree.id, a.strand.id, at, polylineLength(a.strand.points!.slice(cutA)));
  }
  return changed;
}

function shiftsOf(tree: FileTree, habits: AnnotatorHabits, dice: Dice, note: Note): Map<string, Vec3> {
  const shifts = new Map<string, Vec3>();
  for (const node of tree.nodes) {
    const before = tree.strands.find(({ to }) => to === node.id);
    if (node.kind !== "fork" && before) continue;
    let shift: Vec3 = [dice.deviates(habits.placeMm), dice.deviates(habits.placeMm), dice.deviates(habits.placeMm)];
    if (node.kind === "fork" && before) {
      const points = before.points!;
      const back = pointAt(points, polylineLength(points) - 1);
      shift = add(shift, scale(normalise(subtract(back, node.position)), habits.forkLowMm));
      note("moved-fork", tree.id, node.id, node.position, Math.hypot(...shift));
    }
    shifts.set(node.id, shift);
  }
  return shifts;
}

function withEndsSet(
  trees: readonly FileTree[],
  shortable: ReadonlySet<string>,
  habits: AnnotatorHabits,
  pass: number,
  dice: Dice,
  note: Note,
): readonly FileTree[] {
  let changed = trees;
  for (const { tree, strand, to } of branchesOf(trees)) {
    if (to.kind !== "insertion") continue;
    const farTooEarly = dice.happens(shortable.has(strand.id) ? habits.shortEnds : 0);
    const usual = habits.endShortMm + habits.endDriftMm * (pass - 1) + dice.deviates(habits.endMm);
    const short = usual + (farTooEarly ? SHORT_END_MM : 0);
    if (farTooEarly) note("short-end", tree.id, to.id, to.position, short);
    const current = changed.find(({ id }) => id === tree.id)!;
    const next = short > 0 ? withShortEnd(current, strand.id, short) : withLongEnd(current, strand.id, Math.max(-short, 1e-3));
    changed = replaceTree(changed, next);
  }
  return changed;
}

function finished(
  tree: FileTree,
  wrong: ReadonlyMap<string, Segment>,
  sway: (p: Vec3) => Vec3,
  habits: AnnotatorHabits,
  dice: Dice,
  note: Note,
): FileTree {
  const named = (node: FileNode): FileNode => {
    const segment = wrong.get(node.id);
    if (!segment) return node;
    note("wrong-segment", tree.id, node.id, node.position, 0);
    return { ...node, segment };
  };
  return {
    ...tree,
    nodes: tree.nodes.map((node) => ({ ...named(node), position: roundPoint(sway(node.position)) })),
    strands: tree.strands.map((strand) => {
      const factor = habits.radiusFactor * (1 + habits.radiusSpread * dice.passes.normal());
      return {
        ...strand,
        points: strand.points!.map(sway),
        radii: strand.radii!.map((radius) => (radius === null ? null : roundMm(radius * factor))),
        madeBy: [[0, strand.points!.length - 1, "guide"]],
      };
    }),
  };
}
