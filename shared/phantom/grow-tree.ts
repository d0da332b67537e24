import type { FileNode, FileStrand, FileTree, NodeLabels } from "#shared/formats/chordae/chordae-file.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, distance, mix, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import { stringCurve, taperedRadii } from "#shared/phantom/string-curve.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

/** Where a string ends and how. Lengths in millimetres. */
export interface PlannedEnd {
  readonly at: Vec3;
  /** Radius at the end. */
  readonly radius: number;
  /** Kind and labels of the node. */
  readonly labels: NodeLabels;
  /** Direction of the string as it arrives. */
  readonly arrive?: Vec3;
  /** Places its last strand passes. */
  readonly through?: readonly Vec3[];
}

/** Ends that part from each other at one fork; nested for further forks. */
export interface PlannedFork {
  /** Share of the way from the node before to the middle of the ends at which the fork lies (0-1). */
  readonly share: number;
  /** Millimetres; instead of `share`. */
  readonly at?: Vec3;
  /** Radius at the fork. */
  readonly radius: number;
  readonly parts: readonly PlannedPart[];
}

export type PlannedPart = PlannedEnd | PlannedFork;

/** One tree before it is drawn. */
export interface PlannedTree {
  readonly name: string;
  readonly origin: Vec3;
  readonly originLabels: Omit<NodeLabels, "kind">;
  /** Direction of the string as it leaves the origin. */
  readonly leave: Vec3;
  readonly radius: number;
  readonly top: PlannedPart;
  /** The strand at the origin carries the strut label. */
  readonly strut?: boolean;
}

/** Hands out the file's ids in order. */
export class FileIds {
  private trees = 0;
  private nodes = 0;
  private strands = 0;

  tree(): string {
    this.trees += 1;
    return `t${this.trees}`;
  }

  node(): string {
    this.nodes += 1;
    return `n${this.nodes}`;
  }

  strand(): string {
    this.strands += 1;
    return `s${this.strands}`;
  }

  /** Ids go on from here in the copy too; for trials that may be thrown away. */
  copy(): FileIds {
    const copy = new FileIds();
    copy.trees = this.trees;
    copy.nodes = this.nodes;
    copy.strands = this.strands;
    return copy;
  }
}

const isFork = (part: PlannedPart): part is PlannedFork => "parts" in part;

/**
 * The planned tree drawn: nodes, centrelines at steps of `step` mm with the radius at each point, everything rounded to
 * 1e-6 mm. Branches leave a fork in directions between the trunk's and their own, as strings under load do.
 * @param sway sideways sway of strings as a share of their length.
 */
export function growTree(plan: PlannedTree, ids: FileIds, step: number, sway: number, random: SeededRandom): FileTree {
  const nodes: FileNode[] = [];
  const strands: FileStrand[] = [];
  const addNode = (labels: NodeLabels, at: Vec3): FileNode => {
    const node: FileNode = { id: ids.node(), ...labels, position: roundPoint(at) };
    nodes.push(node);
    return node;
  };
  const id = ids.tree();
  const root = addNode({ kind: "origin", ...plan.originLabels }, plan.origin);
  const draw = (part: PlannedPart, before: FileNode, radius: number, leave: Vec3, strut: boolean): void => {
    const at = isFork(part) ? (part.at ?? mix(before.position, middle(part), part.share)) : part.at;
    const node = addNode(isFork(part) ? { kind: "fork" } : part.labels, at);
    const towards = normalise(subtract(isFork(part) ? middle(part) : at, before.position));
    const arrive = isFork(part)
      ? normalise(add(subtract(at, before.position), scale(towards, distance(at, before.position))))
      : part.arrive;
    const through = isFork(part) ? undefined : part.through;
    const points = stringCurve(
      before.position,
      node.position,
      { ...(through && { through }), leave, ...(arrive && { arrive }), sway, step },
      random,
    );
    strands.push({
      id: ids.strand(),
      from: before.id,
      to: node.id,
      ...(strut && { strut: true }),
      points,
      radii: taperedRadii(points, radius, part.radius),
    });
    if (!isFork(part)) return;
    for (const child of part.parts) {
      const own = normalise(
        subtract(isFork(child) ? (child.at ?? middle(child)) : (child.through?.[0] ?? child.at), node.position),
      );
      const childRadius = Math.min(part.radius, roundMm(isFork(child) ? (part.radius + child.radius) / 2 : 1.15 * child.radius));
      draw(child, node, childRadius, normalise(add(own, scale(arrive ?? towards, 0.5))), false);
    }
  };
  draw(plan.top, root, plan.radius, plan.leave, plan.strut === true);
  return { id, name: plan.name, root: root.id, nodes, strands };
}

/** Middle of all the ends beyond a fork. */
function middle(fork: PlannedFork): Vec3 {
  const ends = endsOf(fork);
  return scale(
    ends.reduce<Vec3>((sum, end) => add(sum, end.at), [0, 0, 0]),
    1 / ends.length,
  );
}

/** All ends of a part. */
export function endsOf(part: PlannedPart): PlannedEnd[] {
  return isFork(part) ? part.parts.flatMap(endsOf) : [part];
}
