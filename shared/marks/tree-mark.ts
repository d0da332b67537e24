import type { TreeId } from "#shared/trees/document.ts";

/** How many colours the set has (`--tree-1` to `--tree-8`). */
export const TREE_COLOURS = 8;

/**
 * Line patterns that go with the colours, as lengths of line and gap in multiples of the line width; the first is unbroken.
 * A tree is known by colour and pattern together, so that neither has to be seen alone.
 */
export const TREE_DASHES: readonly (readonly number[])[] = [[], [5, 2.5], [1.2, 2.4], [6, 2.2, 1.2, 2.2]];

export interface TreeMark {
  /** Index into the set of tree colours, 0 to 7. */
  readonly colour: number;
  /** Index into {@link TREE_DASHES}. */
  readonly dash: number;
}

/**
 * Colour and pattern of a tree, always the same for the same id: neighbours in the list differ in both, and 32 trees pass
 * before a pair comes back.
 */
export function treeMark(id: TreeId): TreeMark {
  const number = Math.max(0, Number.parseInt(id.slice(1), 10) - 1) || 0;
  const colour = number % TREE_COLOURS;
  return { colour, dash: (colour + Math.floor(number / TREE_COLOURS)) % TREE_DASHES.length };
}
