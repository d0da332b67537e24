import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, distance, scale } from "#shared/geometry/vec3.ts";
import { Clearance } from "#shared/phantom/clearance.ts";
import { FileIds, growTree, type PlannedTree } from "#shared/phantom/grow-tree.ts";
import type { Solids } from "#shared/phantom/solids.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

const TRIALS = 60;

/** A place where two trees are meant to touch: no clearance is asked there. Millimetres. */
export interface IntendedTouch {
  readonly trees: readonly [string, string];
  readonly at: Vec3;
  readonly reach: number;
}

/** Owners of solids that are no trees. */
export const MUSCLE = "muscle";
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
    let best: { tree: FileTree; gap: number; ids: FileIds } | undefined;
    for (let trial = 0; trial < TRIALS && (best === undefined || best.gap < this.gap); trial++) {
      const ids = this.ids.copy();
      const tree = growTree(plan(this.random), ids, this.step, sway * (1 - trial / TRIALS), this.random);
      const gap = this.gapOf(tree, best?.gap ?? Number.NEGATIVE_INFINITY);
      if (!best || gap > best.gap) best = { tree, gap, ids };
    }
    const { tree, gap, ids } = best!;
    this.ids = ids;
    this.trees.push(tree);
    for (const strand of tree.strands) {
      this.clearance.occupy(tree.name!, strand.points!, strand.radii as number[]);
      this.solids.addTube("string", strand.points!, strand.radii as number[]);
    }
    return { tree, gap };
  }

  /** A strand's root inside the muscle and its tip inside the leaflet: seen in the scan, no part of the tree. */
  embed(from: Vec3, direction: Vec3, depth: number, radius: number): void {
    this.solids.addTube("string", [from, add(from, scale(direction, depth))], [radius, radius]);
  }

  private gapOf(tree: FileTree, enough: number): number {
    const root = tree.nodes.find((node) => node.id === tree.root)!.position;
    const places = new Map(tree.nodes.map((node) => [node.id, node]));
    let least = this.gap;
    for (const strand of tree.strands) {
      const end = places.get(strand.to)!;
      least = Math.min(least, this.strandGap(tree.name!, strand, root, end.kind === "fork" ? null : end.position));
      if (least <= enough) return least;
    }
    return least;
  }

  private strandGap(name: string, strand: FileStrand, root: Vec3, end: Vec3 | null): number {
    const touches = this.touches.filter((touch) => touch.trees.includes(name));
    let least = this.gap;
    for (let i = 0; i < strand.points!.length; i += 2) {
      const place = strand.points![i]!;
      const near = Math.min(distance(place, root), end ? distance(place, end) : Number.POSITIVE_INFINITY);
      const gap = this.clearance.around(place, strand.radii![i] ?? 0, (owner) => {
        if (owner === MUSCLE) return near < this.nearMuscle;
        if (owner === LEAFLET) return near < this.nearLeaflet;
        return touches.some((touch) => touch.trees.includes(owner) && distance(place, touch.at) < touch.reach);
      });
      if (gap < least) least = gap;
    }
    return least;
  }
}
