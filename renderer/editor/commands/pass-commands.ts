import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

const always = () => true;
const canEdit = ({ editor }: DeskContext) => !editor.readOnly;
const isPlaying = ({ editor }: Pick<DeskContext, "editor">) => editor.playback.shown.value !== null;
/** Not a change of the trees: also when the pass is finished. */
const isOurs = ({ editor }: DeskContext) => !editor.keeper.readOnly;

/** History, files and the window itself. */
export const PASS_COMMANDS: readonly Command<DeskContext>[] = [
  {
    name: "undo",
    group: "History",
    label: "Undo",
    keys: ["Ctrl+Z"],
    enabled: ({ editor }) => !editor.readOnly && (editor.keeper.canUndo || editor.waiting.value.length > 0),
    perform: ({ editor }) => editor.undo(),
  },
  {
    name: "redo",
    group: "History",
    label: "Redo",
    keys: ["Ctrl+Shift+Z", "Ctrl+Y"],
    enabled: ({ editor }) => !editor.readOnly && editor.keeper.canRedo,
    perform: ({ editor }) => editor.redo(),
  },
  {
    name: "history",
    group: "History",
    label: "History of the pass",
    keys: ["Shift+H"],
    enabled: always,
    perform: ({ screen }) => screen.toggleHistory(),
  },
  {
    name: "play-back",
    group: "History",
    label: "Play the history back; pause, go on",
    keys: ["Shift+B"],
    enabled: ({ editor }) => isPlaying({ editor }) || editor.canPlayBack,
    perform: ({ screen }) => screen.playBack(),
    foot: ({ editor }) => {
      const played = editor.playback.shown.value;
      return played === null ? null : played.isRunning ? "pause" : "play on";
    },
  },
  {
    name: "play-back-forward",
    group: "History",
    label: "Play back: one edit forward",
    keys: [">"],
    enabled: isPlaying,
    perform: ({ editor }) => editor.playback.step(1),
    foot: (context) => (isPlaying(context) ? "one edit forward" : null),
  },
  {
    name: "play-back-backward",
    group: "History",
    label: "Play back: one edit back",
    keys: ["<"],
    enabled: isPlaying,
    perform: ({ editor }) => editor.playback.step(-1),
    foot: (context) => (isPlaying(context) ? "one edit back" : null),
  },
  {
    name: "mark",
    group: "History",
    label: "Name this point of the history",
    keys: ["Shift+M"],
    enabled: canEdit,
    perform: ({ screen }) => screen.nameMark(),
  },
  {
    name: "palette",
    group: "Pass",
    label: "All commands",
    keys: ["Ctrl+K", "/"],
    enabled: always,
    perform: ({ screen }) => screen.openPalette(),
  },
  { name: "key-help", group: "Pass", label: "Keys", keys: ["?"], enabled: always, perform: ({ screen }) => screen.openKeyHelp() },
  {
    name: "export",
    group: "Pass",
    label: "Export the trees",
    keys: ["Ctrl+E"],
    enabled: always,
    perform: ({ screen }) => screen.openExport(),
  },
  {
    name: "take-in-trees",
    group: "Pass",
    label: "Take in a tree file",
    keys: ["Ctrl+O"],
    enabled: canEdit,
    perform: ({ screen }) => screen.openTakeIn(),
  },
  {
    name: "stand-upright",
    group: "Pass",
    label: "Stand the valve upright",
    keys: ["Shift+U"],
    enabled: isOurs,
    perform: ({ screen }) => screen.openUpright(),
  },
  {
    name: "finish-pass",
    group: "Pass",
    label: "Finish the pass, or work on it again",
    keys: [],
    enabled: (context) => isOurs(context) && !isPlaying(context) && context.editor.waiting.value.length === 0,
    perform: ({ screen }) => screen.finishPass(),
  },
  {
    name: "rules",
    group: "Pass",
    label: "Rules of the assignment",
    keys: [],
    enabled: ({ screen }) => screen.isAssignment(),
    perform: ({ screen }) => screen.openRules(),
  },
  {
    name: "hand-back",
    group: "Pass",
    label: "Hand the assignment back",
    keys: [],
    enabled: (context) => context.screen.isAssignment() && isOurs(context) && !isPlaying(context),
    perform: ({ screen }) => screen.handBack(),
  },
  {
    name: "shelf",
    group: "Pass",
    label: "Back to the shelf",
    keys: [],
    enabled: always,
    perform: ({ screen }) => screen.backToShelf(),
  },
  {
    name: "about",
    group: "Pass",
    label: "About Tautline",
    keys: [],
    enabled: always,
    perform: ({ screen }) => screen.openAbout(),
  },
];
