import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, distance, scale } from "#shared/geometry/vec3.ts";
import { Clearance } from "#shared/phantom/clearance.ts";
import { endsOf, FileIds, growTree, type PlannedTree } from "#shared/phantom/grow-tree.ts";
import type { Solids } from "#shared/phantom/solids.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

const TRIALS = 120;

/**
 * A place where two trees are meant to touch: no clearance is asked there of the two strands that were planned through given
 * places. Millimetres.
 */
export interface IntendedTouch {
  readonly trees: readonly [string, string];
  readonly at: Vec3;
  readonly reach: number;
}

/** Owner of the solids of muscle, which are no tree. */
export const MUSCLE = "muscle";
/** Owner of the leaflet sheets, which are no tree. */
export const LEAFLET = "leaflet";

/** Where trees are planted one after another, each clear of all before it. Lengths in millimetres. */
export class Plot {
  readonly trees: FileTree[] = [];
  readonly touches: IntendedTouch[] = [];
  readonly clearance: Clearance;
  private ids = new FileIds();

  /**
   * @param gap what trees keep between their surfaces. @param nearMuscle, nearLeaflet how far from its own ends a string need
   *   not keep clear of muscle and leaflet.
   */
  constructor(
    readonly solids: Solids,
    private readonly random: SeededRandom,
    private readonly step: number,
    private readonly gap: number,
    private readonly nearMuscle: number,
    private readonly nearLeaflet: number,
  ) {
    this.clearance = new Clearance(Math.max(gap, 0.2));
  }

  /**
   * Draws the plan again and again until the tree keeps clear of all others; the clearest of the trials when none does.
   * @param plan a new proposal at each call.
   * @returns the tree and the least gap to others, at most the gap asked for.
   */
  plant(plan: (random: SeededRandom) => PlannedTree, sway: number): { tree: FileTree; gap: number } {
    let best: { tree: FileTree; gap: number; ids: FileIds; routed: ReadonlySet<string> } | undefined;
    for (let trial = 0; trial < TRIALS && (best === undefined || best.gap < this.gap); trial++) {
      const ids = this.ids.copy();
      const planned = plan(this.random);
      const tree = growTree(planned, ids, this.step, sway * (1 - trial / TRIALS), this.random);
      const routed = routedStrands(planned, tree);
      const gap = this.gapOf(tree, routed, best?.gap ?? Number.NEGATIVE_INFINITY);
      if (!best || gap > best.gap) best = { tree, gap, ids, routed };
    }
    const { tree, gap, ids, routed } = best!;
    this.ids = ids;
    this.trees.push(tree);
    for (const strand of tree.strands) {
      this.clearance.occupy(ownerOf(tree.name!, routed.has(strand.id)), strand.points!, strand.radii as number[]);
      this.solids.addTube("string", strand.points!, strand.radii as number[]);
    }
    return { tree, gap };
  }

  /** A strand's root inside the muscle and its tip inside the leaflet: seen in the scan, no part of the tree. */
  embed(from: Vec3, direction: Vec3, depth: number, radius: number): void {
    this.solids.addTube("string", [from, add(from, scale(direction, depth))], [radius, radius]);
  }

  private gapOf(tree: FileTree, routed: ReadonlySet<string>, enough: number): number {
    const root = tree.nodes.find((node) => node.id === tree.root)!.position;
    const places = new Map(tree.nodes.map((node) => [node.id, node]));
    let least = this.gap;
    for (const strand of tree.strands) {
      const end = places.get(strand.to)!;
      least = Math.min(
        least,
        this.strandGap(routed.has(strand.id) ? tree.name! : null, strand, root, end.kind === "fork" ? null : end.position),
      );
      if (least <= enough) return least;
    }
    return least;
  }

  /** @param name the tree's, for a strand that may touch another tree's; null for every other. */
  private strandGap(name: string | null, strand: FileStrand, root: Vec3, end: Vec3 | null): number {
    const touches = name === null ? [] : this.touches.filter((touch) => touch.trees.includes(name));
    let least = this.gap;
    for (let i = 0; i < strand.points!.length; i += 2) {
      const place = strand.points![i]!;
      const near = Math.min(distance(place, root), end ? distance(place, end) : Number.POSITIVE_INFINITY);
      const gap = this.clearance.around(place, strand.radii![i] ?? 0, (owner) => {
        if (owner === MUSCLE) return near < this.nearMuscle;
        if (owner === LEAFLET) return near < this.nearLeaflet;
        return touches.some(
          ({ trees, at, reach }) => trees.some((other) => owner === ownerOf(other, true)) && distance(place, at) < reach,
        );
      });
      if (gap < least) least = gap;
    }
    return least;
  }
}

/** Strands planned through given places have an owner of their own. */
function ownerOf(tree: string, routed: boolean): string {
  return routed ? `${tree} routed` : tree;
}

function routedStrands(plan: PlannedTree, tree: FileTree): ReadonlySet<string> {
  const ends = endsOf(plan.top).filter((end) => end.through);
  const places = new Set(ends.map((end) => roundPoint(end.at).join(" ")));
  const nodes = new Set(tree.nodes.filter((node) => places.has(node.position.join(" "))).map((node) => node.id));
  return new Set(tree.strands.filter((strand) => nodes.has(strand.to)).map((strand) => strand.id));
}
