import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { Editor } from "#renderer/editor/editor.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { CrossLinkId, NodeId, Strand, StrandId } from "#shared/trees/document.ts";
import { isLooseEnd } from "#shared/trees/edits/rewiring.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import { orientTree } from "#shared/trees/orientation.ts";

const canEdit = ({ editor }: DeskContext) => !editor.readOnly;
const under = ({ view }: DeskContext) => view.pointing.value?.under ?? null;

/** The strand under the pointer and the place on it. */
function strandUnder(context: DeskContext): { strand: StrandId; near: PointMm } | null {
  const here = under(context);
  return here?.kind === "strand" && here.id.startsWith("s") ? { strand: here.id as StrandId, near: here.point } : null;
}

function selectedStrand({ editor }: DeskContext): StrandId | null {
  const { strand } = editor.selection.value;
  return strand?.startsWith("s") ? (strand as StrandId) : null;
}

/** The node under the pointer, else the selected one. */
function nodeHere(context: DeskContext): NodeId | null {
  const here = under(context);
  return here?.kind === "node" ? here.id : (context.editor.selection.value.node ?? null);
}

function selectedLooseEnd({ editor }: DeskContext): NodeId | null {
  const { node } = editor.selection.value;
  const document = editor.document.value;
  const record = node === undefined ? undefined : document.nodes.get(node);
  return record !== undefined && isLooseEnd(document, record) ? record.id : null;
}

/** The two branches of a fork that come nearest to a place: those that go to the new fork when it is split. */
function branchesNear(editor: Editor, fork: NodeId, at: PointMm): StrandId[] {
  const document = editor.document.value;
  const tree = document.trees.get(document.nodes.get(fork)!.tree)!;
  const trunk = orientTree(document, tree).towardsRoot.get(fork)?.id;
  const away = strandsAt(document, fork).filter((strand) => strand.id !== trunk);
  const near = (strand: Strand) => nearestOnPolyline(polylineOf(document, strand), at).distance;
  return [...away]
    .sort((a, b) => near(a) - near(b))
    .slice(0, 2)
    .map((strand) => strand.id);
}

function canSplit(context: DeskContext): boolean {
  const { node } = context.editor.selection.value;
  return (
    canEdit(context) &&
    node !== undefined &&
    strandsAt(context.editor.document.value, node).length > 3 &&
    context.view.pointing.value !== null
  );
}

function deleteSelected(context: DeskContext): void {
  const { editor } = context;
  const here = under(context);
  const { strand, node, tree } = editor.selection.value;
  if (here?.kind === "pin") editor.do({ do: "remove-pin", args: { line: here.strand, index: here.index } });
  else if (strand?.startsWith("x")) editor.do({ do: "delete-link", args: { crossLink: strand as CrossLinkId } });
  else if (strand !== undefined) editor.do({ do: "delete-strand", args: { strand: strand as StrandId } });
  else if (node !== undefined) deleteNode(editor, node);
  else if (tree !== undefined) editor.do({ do: "delete-tree", args: { tree } });
}

/** Mends the strand under the pointer, whichever it is by then. */
function mendHere({ editor }: DeskContext, make: "cut" | "pin" | "stretch"): void {
  const at = editor.strandPlace();
  if (at !== null) editor.do({ do: "on-strand", make, at });
}

/** A node goes with its strand when it ends one, with its tree when it is the origin, and is taken out from between two. */
function deleteNode(editor: Editor, node: NodeId): void {
  const document = editor.document.value;
  const record = document.nodes.get(node)!;
  if (document.trees.get(record.tree)?.root === node) editor.do({ do: "delete-tree", args: { tree: record.tree } });
  else if (isLooseEnd(document, record)) editor.do({ do: "delete-strand", args: { strand: strandsAt(document, node)[0]!.id } });
  else editor.do({ do: "dissolve", args: { node } });
}

/** Mending, at any time. Every entry is one edit with undo. */
export const MEND_COMMANDS: readonly Command<DeskContext>[] = [
  {
    name: "carry",
    group: "Mend",
    label: "Carry the node or pin here; the next click puts it down",
    keys: ["G"],
    enabled: (context) =>
      canEdit(context) &&
      (under(context)?.kind === "node" || under(context)?.kind === "pin" || context.editor.selection.value.node !== undefined),
    perform: (context) => {
      const here = under(context);
      const node = nodeHere(context);
      if (here?.kind === "pin") context.editor.carried.value = { kind: "pin", line: here.strand, index: here.index };
      else if (node !== null) context.editor.carried.value = { kind: "node", id: node };
    },
    foot: (context) =>
      canEdit(context) && (under(context)?.kind === "node" || under(context)?.kind === "pin") ? "carry it" : null,
  },
  {
    name: "insert-pin",
    group: "Mend",
    label: "New pin on the strand here (drag it to re-route)",
    keys: ["P"],
    enabled: (context) => canEdit(context) && strandUnder(context) !== null,
    perform: (context) => mendHere(context, "pin"),
    foot: (context) => (canEdit(context) && strandUnder(context) !== null ? "pin to re-route" : null),
  },
  {
    name: "stretch-way",
    group: "Mend",
    label: "Make the stretch here straight, or follow the image again",
    keys: ["Shift+P"],
    enabled: (context) => canEdit(context) && strandUnder(context) !== null,
    perform: (context) => mendHere(context, "stretch"),
  },
  {
    name: "set-radius",
    group: "Mend",
    label: "Set a radius by hand, on the strand here or at the place chosen on the strip",
    keys: ["Shift+W"],
    enabled: (context) =>
      canEdit(context) && (strandUnder(context) !== null || Object.keys(context.editor.selection.value).length > 0),
    perform: (context) => context.screen.setRadius(strandUnder(context)),
  },
  {
    name: "cut",
    group: "Mend",
    label: "Cut the strand here",
    keys: ["K"],
    enabled: (context) => canEdit(context) && strandUnder(context) !== null,
    perform: (context) => mendHere(context, "cut"),
    foot: (context) => (canEdit(context) && strandUnder(context) !== null ? "cut" : null),
  },
  {
    name: "join",
    group: "Mend",
    label: "Join the selected end to the string or node here",
    keys: ["J"],
    enabled: (context) => canEdit(context) && selectedLooseEnd(context) !== null && under(context) !== null,
    perform: (context) => {
      const end = selectedLooseEnd(context);
      const to = context.editor.leavePlace();
      if (end !== null && to !== null) context.editor.do({ do: "join", end, to });
    },
    foot: (context) => {
      const end = selectedLooseEnd(context);
      const here = under(context);
      return end !== null && here !== null && !(here.kind === "node" && here.id === end) ? "join the selected end here" : null;
    },
  },
  {
    name: "delete",
    group: "Mend",
    label: "Delete the pin here, or what is selected",
    keys: ["Delete"],
    enabled: (context) =>
      canEdit(context) && (under(context)?.kind === "pin" || Object.keys(context.editor.selection.value).length > 0),
    perform: deleteSelected,
    foot: (context) => (canEdit(context) && Object.keys(context.editor.selection.value).length > 0 ? "delete" : null),
  },
  {
    name: "re-root",
    group: "Mend",
    label: "Make this node the origin",
    keys: ["O"],
    enabled: (context) => canEdit(context) && nodeHere(context) !== null,
    perform: (context) => {
      const node = nodeHere(context);
      if (node !== null) context.editor.do({ do: "re-root", args: { node, site: context.editor.sticky.value.site } });
    },
  },
  {
    name: "move-branch",
    group: "Mend",
    label: "Move the selected branch to the string here",
    keys: ["V"],
    enabled: (context) => canEdit(context) && selectedStrand(context) !== null && under(context) !== null,
    perform: (context) => {
      const strand = selectedStrand(context);
      const to = context.editor.leavePlace();
      if (strand !== null && to !== null && !("passing" in to)) context.editor.do({ do: "move-branch", args: { strand, to } });
    },
  },
  {
    name: "exchange-tails",
    group: "Mend",
    label: "Exchange tails of the selected strand and the one here",
    keys: ["T"],
    enabled: (context) => canEdit(context) && selectedStrand(context) !== null && strandUnder(context) !== null,
    perform: (context) => {
      const a = selectedStrand(context);
      const b = strandUnder(context);
      if (a !== null && b !== null) context.editor.do({ do: "exchange-tails", args: { a: { strand: a, near: b.near }, b } });
    },
  },
  {
    name: "split-fork",
    group: "Mend",
    label: "Split the selected fork: its two branches nearest the pointer fork here",
    keys: ["Y"],
    enabled: canSplit,
    perform: (context) => {
      const { editor, view } = context;
      const { node } = editor.selection.value;
      const at = view.pointing.value?.at;
      if (node !== undefined && at !== undefined)
        editor.do({ do: "split-fork", args: { node, moved: branchesNear(editor, node, at), to: at } });
    },
  },
  {
    name: "doubt",
    group: "Mend",
    label: "Doubtful, or sure again",
    keys: ["H"],
    enabled: (context) =>
      canEdit(context) &&
      (context.editor.selection.value.node !== undefined || context.editor.selection.value.strand !== undefined),
    perform: ({ editor }) => toggleDoubt(editor),
    foot: ({ editor }) => ((editor.selection.value.node ?? editor.selection.value.strand) ? "doubtful / sure" : null),
  },
  {
    name: "strut",
    group: "Mend",
    label: "Strut, or no strut",
    keys: ["U"],
    enabled: (context) => canEdit(context) && selectedStrand(context) !== null,
    perform: (context) => {
      const id = selectedStrand(context);
      const strand = id === null ? undefined : context.editor.document.value.strands.get(id);
      if (strand !== undefined)
        context.editor.do({
          do: "label",
          args: { strands: [strand.id], strand: { strut: strand.strut === true ? null : true } },
        });
    },
  },
  {
    name: "rename-tree",
    group: "Mend",
    label: "Rename the selected tree",
    keys: ["F2"],
    enabled: (context) => canEdit(context) && context.editor.selection.value.tree !== undefined,
    perform: ({ screen }) => screen.renameTree(),
  },
];

function toggleDoubt(editor: Editor): void {
  const { node, strand } = editor.selection.value;
  const document = editor.document.value;
  if (node !== undefined) {
    const doubtful = document.nodes.get(node)?.certainty === "doubtful";
    editor.do({ do: "label", args: { nodes: [node], node: { certainty: doubtful ? null : "doubtful" } } });
  } else if (strand?.startsWith("s")) {
    const doubtful = document.strands.get(strand as StrandId)?.certainty === "doubtful";
    editor.do({ do: "label", args: { strands: [strand as StrandId], strand: { certainty: doubtful ? null : "doubtful" } } });
  } else if (strand !== undefined) {
    const doubtful = document.crossLinks.get(strand as CrossLinkId)?.certainty === "doubtful";
    editor.do({
      do: "label",
      args: { crossLinks: [strand as CrossLinkId], strand: { certainty: doubtful ? null : "doubtful" } },
    });
  }
}
