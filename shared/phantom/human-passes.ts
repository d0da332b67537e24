import type { ChordaeFile, FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { arcLengths, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance, mix } from "#shared/geometry/vec3.ts";
import { PHANTOM_DATE, type PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
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

/** One annotator's synthetic pass. */
export interface HumanPass {
  readonly annotator: string;
  readonly fileName: string;
  readonly file: ChordaeFile;
}

/** One mistake put into a pass on purpose, in the words of a comparison's events; ids are those of the true trees. */
export interface HumanError {
  readonly pass: string;
  readonly annotator: string;
  readonly event: "missed-branch" | "exchanged-tails" | "moved-fork" | "short-end";
  readonly trees: readonly string[];
  /** Strands for branches and tails, the node for a moved fork or a short end. */
  readonly items: readonly string[];
  readonly at: Vec3;
  /** Millimetres: of string missed or exchanged, of displacement, or that an end falls short. */
  readonly amount: number;
  readonly says: string;
}

const MOVED_FORK_MM = 0.6;
const SHORT_END_MM = 1.4;

/**
 * Three passes over a phantom, each with small differences of hand and with known mistakes: AN-1 missed a thin branch, AN-2
 * followed the wrong string where two cross, AN-3 placed a fork 0.6 mm low and ended a strand short. A mistake for which the
 * specimen has no fitting place (no crossing, no strand long enough) is left out, and so is its entry.
 */
export function humanPasses(
  specimen: Pick<PhantomSpecimen, "truth" | "crossings" | "grid">,
  seed: number,
): { passes: HumanPass[]; errors: HumanError[] } {
  const { truth, crossings, grid } = specimen;
  const hand = Math.min(0.03, 0.5 * grid.spacing[0]);
  const mistakes: ((trees: readonly FileTree[]) => { trees: FileTree[]; errors: Mistake[] })[] = [
    (trees) => missThinBranch(trees, crossings, new Set(truth.crossLinks?.flatMap(({ from, to }) => [from, to]))),
    (trees) => exchangeTails(trees, crossings),
    (trees) => lowForkAndShortEnd(trees, crossings),
  ];
  const passes: HumanPass[] = [];
  const errors: HumanError[] = [];
  mistakes.forEach((makeMistake, k) => {
    const annotator = `AN-${k + 1}`;
    const fileName = `an-${k + 1}.chordae.json`;
    const made = makeMistake(truth.trees);
    const sway = handSway(hand, new SeededRandom(seed, 100 + k));
    errors.push(...made.errors.map((error) => ({ pass: fileName, annotator, ...error })));
    const file: ChordaeFile = {
      ...truth,
      annotator,
      pass: 1,
      created: PHANTOM_DATE,
      radii: "blur-corrected",
      trees: made.trees.map((tree) => swayed(tree, sway, new SeededRandom(seed, 200 + k))),
      ...(truth.crossLinks && {
        crossLinks: truth.crossLinks.map((link) => ({ ...link, points: link.points!.map(sway) })),
      }),
    };
    passes.push({ annotator, fileName, file: withFittingLinks(file) });
  });
  return { passes, errors };
}

type Mistake = Omit<HumanError, "pass" | "annotator">;

function swayed(tree: FileTree, sway: (p: Vec3) => Vec3, random: SeededRandom): FileTree {
  return {
    ...tree,
    nodes: tree.nodes.map((node) => ({ ...node, position: sway(node.position) })),
    strands: tree.strands.map((strand) => {
      const factor = 1 + 0.04 * random.normal();
      return {
        ...strand,
        points: strand.points!.map(sway),
        radii: strand.radii!.map((radius) => (radius === null ? null : roundMm(radius * factor))),
        madeBy: [[0, strand.points!.length - 1, "guide"]],
      };
    }),
  };
}

/**
 * The thinnest end branch that parts from one other strand: gone with its fork, which nobody sees without it.
 * @param linked nodes that cross-links end at; these stay.
 */
function missThinBranch(
  trees: readonly FileTree[],
  crossings: readonly Crossing[],
  linked: ReadonlySet<string>,
): { trees: FileTree[]; errors: Mistake[] } {
  const spared = new Set(crossings.flatMap((crossing) => crossing.strands));
  const candidates = branchesOf(trees).filter(
    (b) =>
      b.to.kind === "insertion" &&
      b.siblings.length === 1 &&
      b.before !== undefined &&
      b.length > 1 &&
      !spared.has(b.strand.id) &&
      !linked.has(b.from.id) &&
      !linked.has(b.to.id),
  );
  const missed = candidates.sort((a, b) => a.strand.radii!.at(-1)! - b.strand.radii!.at(-1)!)[0];
  if (!missed) return { trees: [...trees], errors: [] };
  const { tree, strand, from } = missed;
  const changed = withoutBranch(missed);
  const error: Mistake = {
    event: "missed-branch",
    trees: [tree.id],
    items: [strand.id],
    at: from.position,
    amount: roundMm(missed.length),
    says: `A thin branch of ${tree.name} was not seen.`,
  };
  return { trees: replaceTree(trees, changed), errors: [error] };
}

/** At the first crossing each string is followed into the other's tail. */
function exchangeTails(trees: readonly FileTree[], crossings: readonly Crossing[]): { trees: FileTree[]; errors: Mistake[] } {
  const crossing = crossings[0];
  const all = branchesOf(trees);
  const a = all.find((b) => b.strand.id === crossing?.strands[0]);
  const b = all.find((other) => other.strand.id === crossing?.strands[1]);
  if (!crossing || !a || !b) return { trees: [...trees], errors: [] };
  const cutA = nearestIndex(a.strand.points!, crossing.at);
  const cutB = nearestIndex(b.strand.points!, crossing.at);
  const next = replaceTree(trees, withTail(a, b, cutA, cutB));
  const error: Mistake = {
    event: "exchanged-tails",
    trees: [a.tree.id, b.tree.id],
    items: [a.strand.id, b.strand.id],
    at: roundPoint(crossing.at),
    amount: roundMm(polylineLength(a.strand.points!.slice(cutA))),
    says: `Where ${a.tree.name} and ${b.tree.name} cross, each was followed into the other's tail.`,
  };
  return { trees: replaceTree(next, withTail(b, a, cutB, cutA)), errors: [error] };
}

function lowForkAndShortEnd(
  trees: readonly FileTree[],
  crossings: readonly Crossing[],
): { trees: FileTree[]; errors: Mistake[] } {
  const spared = new Set(crossings.flatMap((crossing) => crossing.strands));
  const all = branchesOf(trees);
  const crossed = new Set(all.filter((b) => spared.has(b.strand.id)).map((b) => b.tree.id));
  const free = all.filter((b) => !crossed.has(b.tree.id) || crossed.size === trees.length);
  let changed = [...trees];
  const errors: Mistake[] = [];
  // The fork whose strands are longest: what moves is then small against what stays.
  const forks = free.filter(
    (b) =>
      b.to.kind === "fork" &&
      b.length > 3 * MOVED_FORK_MM &&
      daughtersOf(b).every((d) => polylineLength(d.points!) > 3 * MOVED_FORK_MM),
  );
  const low = forks.sort((a, b) => b.length - a.length)[0];
  if (low) {
    const { tree, at } = withLowFork(low);
    changed = replaceTree(changed, tree);
    errors.push({
      event: "moved-fork",
      trees: [tree.id],
      items: [low.to.id],
      at: low.to.position,
      amount: roundMm(distance(at, low.to.position)),
      says: `A fork of ${tree.name} was placed ${MOVED_FORK_MM} mm towards the muscle.`,
    });
  }
  const ends = free.filter(
    (b) =>
      b.to.kind === "insertion" &&
      b.length > 2.5 * SHORT_END_MM &&
      (b.tree.id !== low?.tree.id || trees.length === 1) &&
      !spared.has(b.strand.id),
  );
  const short = ends.sort((a, b) => b.length - a.length)[0];
  if (short) {
    const current = changed.find((tree) => tree.id === short.tree.id)!;
    const tree = withShortEnd(current, short.strand.id, SHORT_END_MM);
    changed = replaceTree(changed, tree);
    errors.push({
      event: "short-end",
      trees: [tree.id],
      items: [short.to.id],
      at: short.to.position,
      amount: SHORT_END_MM,
      says: `A strand of ${tree.name} was ended ${SHORT_END_MM} mm short of the leaflet.`,
    });
  }
  return { trees: changed, errors };
}

const daughtersOf = (branch: Branch) => branch.tree.strands.filter((strand) => strand.from === branch.to.id);

function withLowFork(branch: Branch): { tree: FileTree; at: Vec3 } {
  const { tree, strand, to, length } = branch;
  const at = roundPoint(pointAt(strand.points!, length - MOVED_FORK_MM));
  const lengths = arcLengths(strand.points!);
  const kept = lengths.filter((s) => s < length - MOVED_FORK_MM - 1e-6).length;
  const trunk: FileStrand = {
    ...strand,
    points: [...strand.points!.slice(0, kept), at],
    radii: strand.radii!.slice(0, kept + 1),
  };
  const daughters = new Map(
    daughtersOf(branch).map((daughter) => {
      // From the low fork straight into the branch, as it looks from there.
      const points = daughter.points!;
      const joins = arcLengths(points).filter((s) => s < 2 * MOVED_FORK_MM).length;
      const steps = Math.max(2, joins);
      const lead = Array.from({ length: steps }, (_, i) => roundPoint(mix(at, points[joins]!, i / steps)));
      const radii = [...Array.from({ length: steps }, () => daughter.radii![0]!), ...daughter.radii!.slice(joins)];
      return [daughter.id, { ...daughter, points: [...lead, ...points.slice(joins)], radii }];
    }),
  );
  return {
    at,
    tree: {
      ...tree,
      nodes: tree.nodes.map((node) => (node.id === to.id ? { ...node, position: at } : node)),
      strands: tree.strands.map((each) => (each.id === strand.id ? trunk : (daughters.get(each.id) ?? each))),
    },
  };
}
