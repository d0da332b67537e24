import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import { END_WORDS } from "#renderer/editor/session/words.ts";
import { isUnfinished } from "#renderer/editor/tracing/under-way.ts";
import type { EndKind } from "#shared/trees/document.ts";

const under = ({ view }: DeskContext) => view.pointing.value?.under ?? null;
const kind = ({ editor }: DeskContext) => editor.projection.value.kind;
const canEdit = ({ editor }: DeskContext) => !editor.readOnly;
const isReady = ({ editor }: DeskContext) => editor.proposing.following.value.kind === "ready";
const isDrawing = (context: DeskContext) => canEdit(context) && (kind(context) === "strand" || kind(context) === "branch");

function endCommand(name: string, key: string, end: Exclude<EndKind, "open">): Command<DeskContext> {
  return {
    name,
    group: "Trace",
    label: `End here: ${END_WORDS[end]}`,
    keys: [key],
    enabled: isDrawing,
    perform: ({ editor }) => editor.end(end),
    foot: (context) => (isDrawing(context) ? END_WORDS[end] : null),
  };
}

/** The seven ends, one key each; they share one entry on the foot line. */
export const END_COMMANDS: readonly Command<DeskContext>[] = [
  endCommand("end-insertion", "I", "insertion"),
  endCommand("end-ruptured", "R", "ruptured"),
  endCommand("end-cut", "C", "cut"),
  endCommand("end-lost", "L", "lost-end"),
  endCommand("end-muscle", "M", "muscle-end"),
  endCommand("end-wall", "W", "wall-end"),
  endCommand("end-scan-edge", "E", "scan-edge"),
];

function clickWords(context: DeskContext): string | null {
  const { editor } = context;
  if (editor.carried.value !== null) return "put it down here";
  if (editor.proposedAt(context.view.pointing.value) !== null) return "leave this out, or put it back";
  const here = under(context);
  switch (kind(context)) {
    case "strand":
      return "pin";
    case "branch":
      return "first pin of the branch";
    case "link":
      return "pin of the cross-link";
    case "nothing":
      if (here === null) return "start a tree: its origin";
      if (here.kind === "node" && isUnfinished(editor.document.value, here.id)) return "go on from here";
      return "select";
  }
}

/** Everything that draws. What each does follows from what is under way; there are no modes to choose. */
export const TRACE_COMMANDS: readonly Command<DeskContext>[] = [
  {
    name: "pin",
    group: "Trace",
    label: "Click at the keyboard cursor (pin, start, select)",
    keys: ["Enter", "Space"],
    enabled: () => true,
    perform: ({ view }) => view.clickAtCursor(),
    foot: (context) => (canEdit(context) ? clickWords(context) : null),
  },
  ...END_COMMANDS,
  {
    name: "branch",
    group: "Trace",
    label: "Branch from the strand or node here",
    keys: ["B"],
    enabled: (context) => canEdit(context) && context.editor.leavePlace() !== null,
    perform: ({ editor }) => {
      const from = editor.leavePlace();
      if (from !== null) editor.do({ do: "branch", from });
    },
    foot: (context) =>
      canEdit(context) && context.view.pointing.value !== null && context.editor.leavePlace() !== null
        ? "branch from here"
        : null,
  },
  {
    name: "cross-link",
    group: "Trace",
    label: "Cross-link: from the string here, or to it",
    keys: ["X"],
    enabled: (context) => canEdit(context) && context.editor.leavePlace() !== null,
    perform: ({ editor }) => {
      const to = editor.leavePlace();
      if (to !== null) editor.do({ do: "link", to });
    },
    foot: (context) => {
      if (!canEdit(context)) return null;
      if (kind(context) === "link") return under(context) === null ? "join it to the string under the pointer" : "join it here";
      return kind(context) === "nothing" && under(context) !== null ? "cross-link from here" : null;
    },
  },
  {
    name: "straight",
    group: "Trace",
    label: "Draw the next stretch straight, or along the image again",
    keys: ["S"],
    enabled: isDrawing,
    perform: ({ editor }) => editor.do({ do: "straight" }),
    foot: (context) =>
      isDrawing(context)
        ? context.editor.projection.value.leg === "straight"
          ? "follow the image again"
          : "next stretch straight"
        : null,
  },
  {
    name: "next-in-depth",
    group: "Trace",
    label: "Next string in depth under the pointer",
    keys: ["D"],
    enabled: ({ view }) => view.pointing.value !== null,
    perform: ({ editor }) => editor.nextCandidate(),
    foot: ({ editor }) => ((editor.snapped.value?.candidates ?? 0) > 1 ? "next string in depth" : null),
  },
  {
    name: "propose",
    group: "Trace",
    label: "Propose the whole string here, or take what is proposed",
    keys: ["F"],
    enabled: (context) =>
      canEdit(context) && kind(context) === "nothing" && (isReady(context) || context.view.pointing.value !== null),
    perform: ({ editor }) => (editor.proposing.following.value.kind === "ready" ? editor.proposing.take() : editor.propose()),
    foot: (context) => {
      if (!canEdit(context) || kind(context) !== "nothing") return null;
      if (isReady(context)) return "take what is proposed";
      return context.view.pointing.value !== null && under(context) === null ? "propose the whole string" : null;
    },
  },
  {
    name: "take-to-here",
    group: "Trace",
    label: "Take what is proposed, up to the pointer",
    keys: ["Shift+G"],
    enabled: (context) => canEdit(context) && context.editor.proposedAt(context.view.pointing.value) !== null,
    perform: ({ editor, view }) => editor.proposing.take(editor.proposedAt(view.pointing.value)),
    foot: (context) =>
      canEdit(context) && context.editor.proposedAt(context.view.pointing.value) !== null ? "take it up to here" : null,
  },
  {
    name: "proposed-fork",
    group: "Trace",
    label: "Take the fork that the guide suggests: branch where it leaves a string, join where it meets one",
    keys: ["Shift+F"],
    enabled: (context) => canEdit(context) && context.editor.proposedFork() !== null,
    perform: ({ editor }) => editor.takeProposedFork(),
    foot: ({ editor }) => {
      const fork = editor.proposedFork();
      if (fork === null) return null;
      return fork.kind === "branch" ? "branch where the guide leaves the string" : "join the string it meets";
    },
  },
  {
    name: "close-strings",
    group: "Trace",
    label: "Traced strings impassable for the guide, or passable again",
    keys: ["Shift+I"],
    enabled: canEdit,
    perform: ({ editor }) => editor.toggleClosed(),
    foot: (context) => (isDrawing(context) && context.editor.beside.isClosed.value ? "traced strings passable again" : null),
  },
  {
    name: "take-back-pin",
    group: "Trace",
    label: "Take the last pin back",
    keys: ["Backspace"],
    enabled: (context) => canEdit(context) && kind(context) !== "nothing",
    perform: ({ editor }) => editor.do({ do: "back" }),
    foot: (context) => (canEdit(context) && kind(context) !== "nothing" ? "take a pin back" : null),
  },
  {
    name: "leave",
    group: "Trace",
    label: "Leave the strand as it is (open), put back what is carried, put a proposal away, or end the play back",
    keys: ["Escape"],
    enabled: ({ editor }) =>
      editor.playback.shown.value !== null ||
      editor.proposing.following.value.kind !== "none" ||
      editor.projection.value.kind !== "nothing" ||
      editor.carried.value !== null ||
      editor.selection.value.tree !== undefined ||
      editor.selection.value.strand !== undefined,
    perform: ({ editor }) => {
      if (editor.playback.shown.value !== null) editor.stopPlayback();
      else if (editor.carried.value !== null) editor.carried.value = null;
      else if (editor.proposing.following.value.kind !== "none") editor.proposing.putAway();
      else if (editor.projection.value.kind !== "nothing") editor.do({ do: "leave" });
      else editor.selection.value = {};
    },
    foot: (context) => {
      if (context.editor.playback.shown.value !== null) return "end the play back";
      if (context.editor.carried.value !== null) return "put it back";
      if (context.editor.proposing.following.value.kind !== "none") return "put the proposal away";
      return kind(context) === "nothing" ? null : "leave it open";
    },
  },
];
