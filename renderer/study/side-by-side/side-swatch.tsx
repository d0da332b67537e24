import { SIDE_MARKS } from "#renderer/study/side-by-side/pair-scene.ts";
import type { SideName } from "#renderer/study/side-by-side/sides.ts";
import { TREE_DASHES } from "#shared/marks/tree-mark.ts";

/** A side's colour and line pattern as the views draw what it alone has; without a side, the quiet line of what both have. */
export function SideSwatch({ side }: { readonly side: SideName | null }) {
  const mark = side === null ? null : SIDE_MARKS[side];
  const pattern = mark === null ? "" : TREE_DASHES[mark.dash]!.map((length) => length * 2.5).join(" ");
  return (
    <svg class="tree-swatch" width="26" height="10" viewBox="0 0 26 10" aria-hidden="true">
      <line
        x1="2"
        y1="5"
        x2="24"
        y2="5"
        class={mark === null ? "quiet-line" : `tree-colour-${mark.colour + 1}`}
        stroke-width={mark === null ? 1.2 : 3}
        stroke-dasharray={pattern}
      />
    </svg>
  );
}
