import type { CanonicalTree } from "#shared/compare/canonical.ts";
import { distance } from "#shared/geometry/vec3.ts";

export type CostPreset = "geometry" | "structure";

/** What each edit costs. Inserting or deleting a node or a strand costs 1 in both presets. */
export interface CostModel {
  readonly preset: CostPreset;
  /** Millimetres of displacement that cost as much as an insertion; null under `structure`. */
  readonly positionScale: number | null;
  /** Every total is a multiple of this; 0 = no such step. Lets a lower bound be rounded up. */
  readonly step: number;
  node(a: CanonicalTree, i: number, b: CanonicalTree, j: number): number;
  strand(lengthA: number, lengthB: number): number;
}

/** Costs of places and lengths: node min(2, [types differ] + d / positionScale), strand |la - lb| / max(la, lb). */
export function geometryCosts(positionScale: number): CostModel {
  return {
    preset: "geometry",
    positionScale,
    step: 0,
    node: (a, i, b, j) => {
      const [p, q] = [a.nodes[i]!, b.nodes[j]!];
      return Math.min(2, (p.type === q.type ? 0 : 1) + distance(p.place, q.place) / positionScale);
    },
    strand: (la, lb) => {
      const longer = Math.max(la, lb);
      return longer === 0 ? 0 : Math.abs(la - lb) / longer;
    },
  };
}

/** Costs of structure alone: a node of another type 1, else 0; strands are exchanged for nothing. */
export function structureCosts(): CostModel {
  return {
    preset: "structure",
    positionScale: null,
    step: 1,
    node: (a, i, b, j) => (a.nodes[i]!.type === b.nodes[j]!.type ? 0 : 1),
    strand: () => 0,
  };
}
