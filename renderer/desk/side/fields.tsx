import type { ComponentChildren } from "preact";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { OriginAxes, PlaceAxes } from "#renderer/desk/side/label-axes.tsx";
import { LinkFields, StrandFields } from "#renderer/desk/side/line-fields.tsx";
import { NodeFields } from "#renderer/desk/side/node-fields.tsx";
import { TreeFields } from "#renderer/desk/side/tree-fields.tsx";
import { afterLabelling } from "#renderer/editor/session/sticky-labels.ts";
import type { CrossLinkId, StrandId } from "#shared/trees/document.ts";

/** What is selected, with its labels; without a selection, the labels that the next strings take. */
export function Fields({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  const document = editor.document.value;
  const { node, strand, tree } = editor.selection.value;
  const nodeRecord = node === undefined ? undefined : document.nodes.get(node);
  const strandRecord = strand?.startsWith("s") ? document.strands.get(strand as StrandId) : undefined;
  const link = strand?.startsWith("x") ? document.crossLinks.get(strand as CrossLinkId) : undefined;
  const treeRecord = tree === undefined ? undefined : document.trees.get(tree);
  let shown: ComponentChildren;
  if (nodeRecord !== undefined) shown = <NodeFields model={model} node={nodeRecord} />;
  else if (strandRecord !== undefined) shown = <StrandFields model={model} strand={strandRecord} />;
  else if (link !== undefined) shown = <LinkFields model={model} link={link} />;
  else if (treeRecord !== undefined) shown = <TreeFields model={model} tree={treeRecord} />;
  else shown = <NextStrings model={model} />;
  return (
    <section class="fields" aria-label="Selected" tabIndex={0}>
      {shown}
    </section>
  );
}

/** Labels that stay chosen: the next origin and the next insertion take them. */
function NextStrings({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  const sticky = editor.sticky.value;
  const set = (labels: Parameters<typeof afterLabelling>[1]) => {
    editor.sticky.value = afterLabelling(editor.sticky.value, labels);
  };
  return (
    <>
      <h2>Labels of the next strings</h2>
      <OriginAxes values={sticky} set={set} disabled={editor.readOnly} />
      <PlaceAxes values={sticky} set={set} disabled={editor.readOnly} />
    </>
  );
}
