import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { OriginAxes } from "#renderer/desk/side/label-axes.tsx";
import { TreeSwatch } from "#renderer/desk/side/tree-swatch.tsx";
import { mmText } from "#renderer/editor/session/words.ts";
import type { Tree } from "#shared/trees/document.ts";

/** A tree as a whole. */
export function TreeFields({ model, tree }: { readonly model: DeskModel; readonly tree: Tree }) {
  const { editor } = model;
  const measures = model.measures.value.trees.find((one) => one.id === tree.id);
  const root = tree.root === null ? undefined : editor.document.value.nodes.get(tree.root);
  return (
    <>
      <h2>
        <TreeSwatch tree={tree.id} /> {tree.name} <span class="soft">{tree.id}</span>
      </h2>
      <dl class="facts figures">
        <dt>length</dt>
        <dd>{mmText(measures?.length ?? 0, 2)}</dd>
        <dt>forks, ends</dt>
        <dd>
          {measures?.forks ?? 0}, {measures?.ends ?? 0}
        </dd>
      </dl>
      {root === undefined ? (
        <p class="warn">No origin. Select the node it grows from and make it the origin (O).</p>
      ) : (
        <OriginAxes values={root} set={(labels) => editor.labelNodes([root.id], labels)} disabled={editor.readOnly} />
      )}
      {editor.readOnly ? null : (
        <div class="row">
          <button type="button" class="button" onClick={() => (model.sheet.value = "rename")}>
            rename
          </button>
          <button type="button" class="button danger" onClick={() => editor.do({ do: "delete-tree", args: { tree: tree.id } })}>
            delete the tree
          </button>
        </div>
      )}
    </>
  );
}
