import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";

/** What section and space draw dashed: the proposal, else the overlooked stretch that is looked at. */
export function suggestedLines({ editor, overlooked, tab }: DeskModel): readonly ProposedLine[] {
  const proposed = editor.proposing.lines.value;
  if (proposed.length > 0) return proposed;
  const stretch = tab.value === "overlooked" ? overlooked.current : null;
  return stretch === null || stretch.dismissedBy !== null ? [] : [{ points: stretch.points, kept: true, doubtful: [] }];
}
