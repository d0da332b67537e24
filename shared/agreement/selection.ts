import type { Reasons } from "#shared/agreement/interval.ts";
import type { ItemTable } from "#shared/agreement/items.ts";

/** How far numbers on matched items are selected: printed with each of them. */
export interface Selection {
  /** The heading that every number on matched items carries. */
  readonly title: string;
  readonly toleranceMm: number;
  /** Items that all compared passes marked. */
  readonly matched: number;
  /** Items that at least one of them marked. */
  readonly union: number;
  readonly share: number | null;
  /** Share of pairs, matched or just missed, whose matching would change with a gate 10 % narrower or wider. */
  readonly nearGateShare: number | null;
  readonly reasons: Reasons;
}

/** Counts of matched items and of all, and the share of pairs within 10 % of the gate. @param passes which of the table's passes are compared. */
export function selectionOf(table: ItemTable, passes: readonly number[], toleranceMm: number): Selection {
  const has = table.items.map(({ members }) => passes.filter((p) => members[p]! >= 0).length);
  const union = has.filter((count) => count > 0).length;
  const matched = passes.length < 2 ? 0 : has.filter((count) => count === passes.length).length;
  const near = table.matchedGates.filter((gate) => gate > 0.9).length + table.missedGates.length;
  const pairs = table.matchedGates.length + table.missedGates.length;
  const reasons: Record<string, string> = {};
  if (union === 0) reasons.share = "None of these passes marked anything.";
  if (pairs === 0) reasons.nearGateShare = "No two passes marked the same item.";
  const whom = passes.length === 2 ? "both" : `all ${passes.length}`;
  return {
    title: `given that ${whom} marked it`,
    toleranceMm,
    matched,
    union,
    share: union === 0 ? null : matched / union,
    nearGateShare: pairs === 0 ? null : near / pairs,
    reasons,
  };
}

/** The three tolerances at which results are repeated: half, once and twice. @param tolerance millimetres. */
export function threeTolerances(tolerance: number): readonly [number, number, number] {
  return [tolerance / 2, tolerance, 2 * tolerance];
}
