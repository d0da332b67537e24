import { TREE_DASHES, treeMark } from "#shared/marks/tree-mark.ts";
import type { TreeId } from "#shared/trees/document.ts";

/** A tree's colour and line pattern, as the views draw it. */
export function TreeSwatch({ tree }: { readonly tree: TreeId }) {
  const { colour, dash } = treeMark(tree);
  const pattern = TREE_DASHES[dash]!.map((length) => length * 2.5).join(" ");
  return (
    <svg class="tree-swatch" width="26" height="10" viewBox="0 0 26 10" aria-hidden="true">
      <line x1="2" y1="5" x2="24" y2="5" class={`tree-colour-${colour + 1}`} stroke-width="3" stroke-dasharray={pattern} />
    </svg>
  );
}
