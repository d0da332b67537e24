import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

const always = () => true;
const canEdit = ({ editor }: DeskContext) => !editor.readOnly;

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
    enabled: canEdit,
    perform: ({ screen }) => screen.openUpright(),
  },
  {
    name: "finish-pass",
    group: "Pass",
    label: "Finish the pass, or take it up again",
    keys: [],
    enabled: canEdit,
    perform: ({ screen }) => screen.finishPass(),
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
