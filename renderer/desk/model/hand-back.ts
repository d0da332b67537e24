import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { selectNode } from "#renderer/editor/selection.ts";
import type { OpenEnd } from "#shared/api/study.ts";
import { openEndsOf } from "#shared/study/returned-log.ts";
import type { NodeId } from "#shared/trees/document.ts";

/** The way to hand an assignment back: what is unfinished is named first, else the shelf asks where to. */
export async function handBack(model: DeskModel): Promise<void> {
  const { editor, services, specimen } = model;
  // A strand under way is left open, as it is; every edit is made and written before the pass goes out of hand.
  editor.carried.value = null;
  editor.do({ do: "leave" });
  await editor.settled();
  await editor.keeper.settled();
  if (openEndsOf(editor.document.value).length > 0) model.sheet.value = "open-ends";
  else services.goTo({ screen: "shelf", handBack: specimen.value.id });
}

/** Shows an open end: selected, and in the middle of the section. */
export function goToOpenEnd({ editor, section }: Pick<DeskModel, "editor" | "section">, { node }: OpenEnd): void {
  const document = editor.document.value;
  const found = document.nodes.get(node as NodeId);
  if (found === undefined) return;
  editor.selection.value = selectNode(document, found.id);
  section.goTo(found.position);
}
