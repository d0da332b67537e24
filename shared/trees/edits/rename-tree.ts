import type { TreeDocument, TreeId } from "#shared/trees/document.ts";
import { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import type { EditPlan } from "#shared/trees/edits/edit-plan.ts";
import { refusal, treeOf } from "#shared/trees/edits/refusal.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import { treeNamed } from "#shared/trees/names.ts";

/** Plan of another name for a tree. @throws misuse when the name is empty or another tree's */
export function renameTree(
  document: TreeDocument,
  ids: IdSource,
  args: { readonly tree: TreeId; readonly name: string },
): EditPlan {
  const draft = new EditDraft(document, ids);
  const tree = treeOf(document, args.tree);
  draft.putTree({ ...tree, name: freeName(document, args.name, tree.id) });
  return draft.finish("rename-tree");
}

/** The name without outer blanks. @throws misuse when it is empty or the name of a tree other than `tree` */
export function freeName(document: TreeDocument, name: string, tree: TreeId): string {
  const trimmed = name.trim();
  if (trimmed === "") throw refusal("A tree needs a name.", "empty tree name", "Type a name such as ALPM-03.");
  const holder = treeNamed(document, trimmed);
  if (holder !== null && holder !== tree)
    throw refusal(`Another tree is named ${trimmed}.`, "tree name in use", "Choose another name.");
  return trimmed;
}
