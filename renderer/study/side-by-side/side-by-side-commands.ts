import type { Command } from "#renderer/editor/commands/command.ts";
import { type KeyPress, textOfPress } from "#renderer/editor/commands/shortcut.ts";
import { VIEW_COMMANDS, type ViewContext } from "#renderer/editor/commands/view-commands.ts";
import type { SideName } from "#renderer/study/side-by-side/sides.ts";

/** What the commands of the screen act on. */
export interface SideBySideContext extends ViewContext {
  readonly pair: {
    /** How many differences the list has. */
    readonly count: () => number;
    readonly step: (by: 1 | -1) => void;
    readonly stripSide: () => SideName;
    readonly otherSide: () => void;
    readonly isRunning: () => boolean;
    readonly cancel: () => void;
  };
  readonly screen: ViewContext["screen"] & {
    readonly openExport: () => void;
    readonly openKeyHelp: () => void;
    readonly chooseSides: () => void;
    readonly backToShelf: () => void;
  };
}

const always = () => true;
const hasDifferences = ({ pair }: SideBySideContext) => pair.count() > 0;

/** Every command of the screen; a key that the desk has as well does the like here. */
export const SIDE_BY_SIDE_COMMANDS: readonly Command<SideBySideContext>[] = [
  {
    name: "next-difference",
    group: "Go",
    label: "Next difference",
    keys: ["Q"],
    enabled: hasDifferences,
    perform: ({ pair }) => pair.step(1),
    foot: (context) => (hasDifferences(context) ? "next difference" : null),
  },
  {
    name: "previous-difference",
    group: "Go",
    label: "Previous difference",
    keys: ["Shift+Q"],
    enabled: hasDifferences,
    perform: ({ pair }) => pair.step(-1),
    foot: (context) => (hasDifferences(context) ? "previous" : null),
  },
  {
    name: "other-side",
    group: "Go",
    label: "The strip shows the other side",
    keys: ["Shift+T"],
    enabled: hasDifferences,
    perform: ({ pair }) => pair.otherSide(),
    foot: (context) => (hasDifferences(context) ? `strip of ${context.pair.stripSide() === "a" ? "B" : "A"}` : null),
  },
  {
    name: "stop-comparing",
    group: "Go",
    label: "Stop comparing",
    keys: ["Escape"],
    enabled: ({ pair }) => pair.isRunning(),
    perform: ({ pair }) => pair.cancel(),
    foot: ({ pair }) => (pair.isRunning() ? "stop comparing" : null),
  },
  ...VIEW_COMMANDS,
  {
    name: "export-comparison",
    group: "Pass",
    label: "Export the comparison",
    keys: ["Ctrl+E"],
    enabled: always,
    perform: ({ screen }) => screen.openExport(),
  },
  {
    name: "choose-sides",
    group: "Pass",
    label: "Choose the two sides",
    keys: ["Ctrl+O"],
    enabled: always,
    perform: ({ screen }) => screen.chooseSides(),
  },
  {
    name: "key-help",
    group: "Pass",
    label: "Keys",
    keys: ["?"],
    enabled: always,
    perform: ({ screen }) => screen.openKeyHelp(),
  },
  {
    name: "shelf",
    group: "Pass",
    label: "Back to the shelf",
    keys: [],
    enabled: always,
    perform: ({ screen }) => screen.backToShelf(),
  },
];

const byKey = new Map(SIDE_BY_SIDE_COMMANDS.flatMap((command) => command.keys.map((key) => [key, command] as const)));

/** The command that a key press stands for; null when it stands for none. */
export function sideBySideCommandFor(press: KeyPress): Command<SideBySideContext> | null {
  return byKey.get(textOfPress(press)) ?? null;
}
