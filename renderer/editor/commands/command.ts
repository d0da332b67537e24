export const COMMAND_GROUPS = ["Trace", "Mend", "Go", "See", "History", "Pass"] as const;
export type CommandGroup = (typeof COMMAND_GROUPS)[number];

/**
 * One thing a person can do. Menu, foot line, palette, keyboard help and the README's key list come from the table of these;
 * nothing else binds a key.
 * @typeParam Context what commands act on; a type parameter so that the table can be tested with a fake.
 */
export interface Command<Context> {
  /** Stable, kebab-case. */
  readonly name: string;
  readonly group: CommandGroup;
  /** As menus show it. */
  readonly label: string;
  /** In the words of `shortcut.ts`, such as `Ctrl+Z`; empty = by menu and palette only. */
  readonly keys: readonly string[];
  readonly enabled: (context: Context) => boolean;
  readonly perform: (context: Context) => void | Promise<void>;
  /** A few words for the foot line while the command makes sense now; left out = never there. */
  readonly foot?: (context: Context) => string | null;
}
