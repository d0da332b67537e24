import type { Muscle, TreeDocument, TreeId } from "#shared/trees/document.ts";

/** What tree names begin with, by muscle; trees whose muscle is not known begin with TREE. */
export const NAME_PREFIX: Readonly<Record<Muscle, string>> = { "antero-lateral": "ALPM", "postero-medial": "PMPM" };

/**
 * The next name for a tree of a muscle: ALPM-04 when ALPM-03 is the highest in use. Gaps are not filled, so that a name never
 * comes to mean another tree.
 */
export function nextTreeName(document: TreeDocument, muscle: Muscle | undefined): string {
  const prefix = muscle === undefined ? "TREE" : NAME_PREFIX[muscle];
  let highest = 0;
  for (const { name } of document.trees.values()) {
    const match = /^([A-Z]+)-(\d{1,9})$/.exec(name);
    if (match && match[1] === prefix) highest = Math.max(highest, Number(match[2]));
  }
  return `${prefix}-${String(highest + 1).padStart(2, "0")}`;
}

/** The tree that has a name; null when none has. */
export function treeNamed(document: TreeDocument, name: string): TreeId | null {
  for (const tree of document.trees.values()) if (tree.name === name) return tree.id;
  return null;
}
