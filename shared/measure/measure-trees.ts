import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { forkAngles, type LeavingLine } from "#shared/measure/fork-angles.ts";
import { type RadiusStatistics, radiusStatistics } from "#shared/measure/radius-statistics.ts";
import { type PlainSet, type PlainTree, placeOf } from "#shared/trees/plain-trees.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/** Lengths in millimetres, areas in square millimetres, angles in degrees; null = cannot be given. */
export interface StrandMeasures extends RadiusStatistics {
  readonly id: string;
  readonly tree: string;
  readonly length: number;
  readonly straightLength: number;
  /** Length / straight length - 1; null without a straight length. */
  readonly slack: number | null;
  /** Branch order: 1 at the origin's strand, +1 at each fork; null where the root does not reach. */
  readonly order: number | null;
  /** True when more than one end hangs on it; null where the root does not reach. */
  readonly trunk: boolean | null;
}

export interface NodeMeasures {
  readonly id: string;
  readonly tree: string;
  readonly kind: string;
  /** From the root along the strands; null where the root does not reach. */
  readonly pathLength: number | null;
  readonly straightLength: number | null;
  readonly straightnessAngle: number | null;
  readonly branchingAngle: number | null;
}

export interface TreeMeasures {
  readonly id: string;
  readonly name: string;
  readonly length: number;
  readonly strands: number;
  readonly forks: number;
  readonly ends: number;
}

export interface Measures {
  readonly strands: readonly StrandMeasures[];
  readonly nodes: readonly NodeMeasures[];
  readonly trees: readonly TreeMeasures[];
  readonly totals: {
    readonly trees: number;
    readonly strands: number;
    readonly forks: number;
    readonly ends: number;
    readonly length: number;
  };
}

/** Measures of every tree; cross-links take no part. Lengths are sums of distances between consecutive stored points. */
export function measureTrees(set: PlainSet): Measures {
  const parts = set.trees.map(measureTree);
  const trees = parts.map((part) => part.tree);
  const total = (value: (tree: TreeMeasures) => number) => trees.reduce((sum, tree) => sum + value(tree), 0);
  return {
    strands: parts.flatMap((part) => part.strands),
    nodes: parts.flatMap((part) => part.nodes),
    trees,
    totals: {
      trees: trees.length,
      strands: total((tree) => tree.strands),
      forks: total((tree) => tree.forks),
      ends: total((tree) => tree.ends),
      length: total((tree) => tree.length),
    },
  };
}

const isEndKind = (kind: string) => kind !== "origin" && kind !== "fork" && kind !== "waypoint";

function measureTree(tree: PlainTree): { strands: StrandMeasures[]; nodes: NodeMeasures[]; tree: TreeMeasures } {
  const rooted = rootedStrands(tree);
  const byId = new Map(tree.nodes.map((node) => [node.id, node]));
  const reached = reachOf(tree, rooted);
  const lengths = rooted.map((strand) => polylineLength(strand.line));
  const ends = endsBeyond(rooted, (id) => isEndKind(byId.get(id)?.kind ?? ""));
  const order: (number | null)[] = [];
  rooted.forEach((strand, k) => {
    const above = strand.before < 0 ? 0 : order[strand.before]!;
    const passes = strand.before >= 0 && byId.get(strand.from)?.kind === "waypoint";
    order[k] = !reached[k] || above === null ? null : passes ? above : above + 1;
  });
  const byFileOrder = new Map(rooted.map((strand, k) => [strand.strand.id, k]));
  const strands = tree.strands.map((file): StrandMeasures => {
    const k = byFileOrder.get(file.id)!;
    const line = rooted[k]!.line;
    const straightLength = line.length === 0 ? 0 : distance(line[0]!, line[line.length - 1]!);
    return {
      id: file.id,
      tree: tree.id,
      length: lengths[k]!,
      straightLength,
      slack: straightLength === 0 ? null : lengths[k]! / straightLength - 1,
      ...radiusStatistics(line, rooted[k]!.radii),
      order: order[k]!,
      trunk: reached[k] ? ends[k]! > 1 : null,
    };
  });
  const paths = pathLengths(tree, rooted, lengths, reached);
  const root = tree.root === null ? undefined : byId.get(tree.root);
  const nodes = tree.nodes.map((node): NodeMeasures => {
    const arrives = rooted.findIndex((strand) => strand.to === node.id);
    const leaves = rooted.map((_, k) => k).filter((k) => rooted[k]!.from === node.id && rooted[k]!.to !== node.id);
    const path = paths.get(node.id) ?? null;
    const isFork = node.kind === "fork" && path !== null;
    const angles = isFork
      ? forkAngles(
          arrives < 0 ? null : backwards(rooted, arrives, byId),
          leaves.map((k) => onwards(rooted, k, byId)),
        )
      : { straightnessAngle: null, branchingAngle: null };
    return {
      id: node.id,
      tree: tree.id,
      kind: node.kind,
      pathLength: path,
      straightLength: path === null || !root ? null : distance(placeOf(root), placeOf(node)),
      ...angles,
    };
  });
  const count = (test: (kind: string) => boolean) => tree.nodes.filter((node) => test(node.kind)).length;
  const length = lengths.reduce((sum, value) => sum + value, 0);
  return {
    strands,
    nodes,
    tree: {
      id: tree.id,
      name: tree.name ?? "",
      length,
      strands: tree.strands.length,
      forks: count((kind) => kind === "fork"),
      ends: count(isEndKind),
    },
  };
}

/** Whether each rooted strand hangs on the tree's root. */
function reachOf(tree: PlainTree, rooted: readonly RootedStrand[]): boolean[] {
  const reached: boolean[] = [];
  rooted.forEach((strand, k) => {
    reached[k] = tree.root !== null && (strand.before < 0 ? strand.from === tree.root : reached[strand.before]!);
  });
  return reached;
}

/** Ends that hang on each strand. */
function endsBeyond(rooted: readonly RootedStrand[], isEnd: (id: string) => boolean): number[] {
  const ends = rooted.map((strand) => (isEnd(strand.to) ? 1 : 0));
  for (let k = rooted.length - 1; k >= 0; k--) if (rooted[k]!.before >= 0) ends[rooted[k]!.before]! += ends[k]!;
  return ends;
}

function pathLengths(
  tree: PlainTree,
  rooted: readonly RootedStrand[],
  lengths: readonly number[],
  reached: readonly boolean[],
): Map<string, number> {
  const paths = new Map<string, number>();
  if (tree.root !== null) paths.set(tree.root, 0);
  rooted.forEach((strand, k) => {
    if (reached[k] && !paths.has(strand.to)) paths.set(strand.to, paths.get(strand.from)! + lengths[k]!);
  });
  return paths;
}

/** The line leaving a fork along a strand, carried on through waypoints. */
function onwards(rooted: readonly RootedStrand[], first: number, byId: ReadonlyMap<string, { kind: string }>): LeavingLine {
  const line: Vec3[] = [...rooted[first]!.line];
  const radii = [...rooted[first]!.radii];
  let k = first;
  while (byId.get(rooted[k]!.to)?.kind === "waypoint") {
    const next = rooted.findIndex((strand) => strand.before === k);
    if (next < 0) break;
    line.push(...rooted[next]!.line.slice(1));
    radii.push(...rooted[next]!.radii.slice(1));
    k = next;
  }
  return { line, radii };
}

/** The line leaving a fork towards the root, carried on through waypoints. */
function backwards(rooted: readonly RootedStrand[], last: number, byId: ReadonlyMap<string, { kind: string }>): LeavingLine {
  const line: Vec3[] = [...rooted[last]!.line].reverse();
  const radii = [...rooted[last]!.radii].reverse();
  let k = last;
  while (byId.get(rooted[k]!.from)?.kind === "waypoint" && rooted[k]!.before >= 0) {
    k = rooted[k]!.before;
    line.push(...[...rooted[k]!.line].reverse().slice(1));
    radii.push(...[...rooted[k]!.radii].reverse().slice(1));
  }
  return { line, radii };
}
