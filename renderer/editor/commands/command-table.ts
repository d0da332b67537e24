import { COMMAND_GROUPS, type Command, type CommandGroup } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import { GO_COMMANDS } from "#renderer/editor/commands/go-commands.ts";
import { MEND_COMMANDS } from "#renderer/editor/commands/mend-commands.ts";
import { PASS_COMMANDS } from "#renderer/editor/commands/pass-commands.ts";
import { type KeyPress, shownShortcut, textOfPress } from "#renderer/editor/commands/shortcut.ts";
import { TRACE_COMMANDS } from "#renderer/editor/commands/trace-commands.ts";
import { VIEW_COMMANDS } from "#renderer/editor/commands/view-commands.ts";

/** Every command of the desk. */
export const COMMANDS: readonly Command<DeskContext>[] = [
  ...TRACE_COMMANDS,
  ...MEND_COMMANDS,
  ...GO_COMMANDS,
  ...VIEW_COMMANDS,
  ...PASS_COMMANDS,
];

const byKey = new Map(COMMANDS.flatMap((command) => command.keys.map((key) => [key, command] as const)));

/** The command that a key press stands for; null when it stands for none. */
export function commandFor(press: KeyPress): Command<DeskContext> | null {
  return byKey.get(textOfPress(press)) ?? null;
}

export function commandNamed(name: string): Command<DeskContext> | null {
  return COMMANDS.find((command) => command.name === name) ?? null;
}

/** Commands by group, in the order of the table; groups without a command are left out. */
export function groupedCommands<Context>(
  commands: readonly Command<Context>[],
): { group: CommandGroup; commands: Command<Context>[] }[] {
  return COMMAND_GROUPS.map((group) => ({ group, commands: commands.filter((command) => command.group === group) })).filter(
    (entry) => entry.commands.length > 0,
  );
}

/** The key list as Markdown, for the README. */
export function keyListMarkdown(): string {
  const rows = groupedCommands(COMMANDS).flatMap(({ group, commands }) => [
    `**${group}**\n`,
    "| key | does |",
    "| --- | --- |",
    ...commands
      .filter((command) => command.keys.length > 0)
      .map(
        (command) =>
          `| ${command.keys.map((key) => `\`${shownShortcut(key).replaceAll("|", "\\|")}\``).join(" ")} | ${command.label} |`,
      ),
    "",
  ]);
  return rows.join("\n");
}
