import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { Editor } from "#renderer/editor/editor.ts";
import { selectNode } from "#renderer/editor/selection.ts";
import { isUnfinished } from "#renderer/editor/tracing/under-way.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { CrossLinkId, NodeId, StrandId } from "#shared/trees/document.ts";
import { byCounter } from "#shared/trees/ids.ts";

const always = () => true;

/** Open ends and origins without a strand, in the order of their ids. */
export function openNodes(editor: Editor): NodeId[] {
  return [...editor.document.value.nodes.values()]
    .map((node) => node.id)
    .filter((id) => isUnfinished(editor.document.value, id))
    .sort(byCounter);
}

function goToOpen({ editor, view }: DeskContext, by: 1 | -1): void {
  const open = openNodes(editor);
  if (open.length === 0) return;
  const { underWay } = editor;
  const here = underWay.value.kind === "strand" ? underWay.value.tip : editor.selection.value.node;
  const at = here === undefined ? -1 : open.indexOf(here);
  const next = open[at < 0 ? (by === 1 ? 0 : open.length - 1) : (at + by + open.length) % open.length]!;
  editor.selection.value = selectNode(editor.document.value, next);
  editor.do({ do: "resume", node: next });
  view.goTo(editor.document.value.nodes.get(next)!.position);
}

/** The place that stands for the selection: its node, the first node of its strand, the root of its tree. */
export function placeOfSelection(editor: Editor): PointMm | null {
  const { node, strand, tree } = editor.selection.value;
  const document = editor.document.value;
  const line = strand?.startsWith("x")
    ? document.crossLinks.get(strand as CrossLinkId)
    : document.strands.get(strand as StrandId);
  const root = tree === undefined ? undefined : document.trees.get(tree)?.root;
  const id = node ?? line?.to ?? root ?? undefined;
  return id === undefined ? null : (document.nodes.get(id)?.position ?? null);
}

/** Going to places, and to what is left to do. */
export const GO_COMMANDS: readonly Command<DeskContext>[] = [
  {
    name: "next-open",
    group: "Go",
    label: "Next open branch",
    keys: ["N"],
    enabled: ({ editor }) => openNodes(editor).length > 0,
    perform: (context) => goToOpen(context, 1),
    foot: ({ editor }) =>
      editor.projection.value.kind === "nothing" && openNodes(editor).length > 0 ? "next open branch" : null,
  },
  {
    name: "previous-open",
    group: "Go",
    label: "Previous open branch",
    keys: ["Shift+N"],
    enabled: ({ editor }) => openNodes(editor).length > 0,
    perform: (context) => goToOpen(context, -1),
  },
  {
    name: "go-to-selection",
    group: "Go",
    label: "Bring the selection to the middle",
    keys: ["Z"],
    enabled: ({ editor }) => placeOfSelection(editor) !== null,
    perform: ({ editor, view }) => {
      const at = placeOfSelection(editor);
      if (at !== null) view.goTo(at);
    },
  },
  {
    name: "next-doubtful-place",
    group: "Go",
    label: "Next place along the strand where the image fit falls",
    keys: ["Shift+D"],
    enabled: always,
    perform: ({ view }) => view.nextDoubtfulPlace(),
  },
  {
    name: "next-finding",
    group: "Go",
    label: "Next finding or overlooked stretch",
    keys: ["Q"],
    enabled: always,
    perform: ({ screen }) => screen.stepFinding(1),
  },
  {
    name: "previous-finding",
    group: "Go",
    label: "Previous finding or overlooked stretch",
    keys: ["Shift+Q"],
    enabled: always,
    perform: ({ screen }) => screen.stepFinding(-1),
  },
  {
    name: "dismiss-finding",
    group: "Go",
    label: "Dismiss the finding or the stretch, with a reason",
    keys: ["Shift+X"],
    enabled: ({ editor }) => !editor.readOnly,
    perform: ({ screen }) => screen.dismissFinding(),
  },
];
