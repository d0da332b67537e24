import { effect } from "@preact/signals";
import type { Command } from "#renderer/editor/commands/command.ts";
import { COMMANDS, groupedCommands } from "#renderer/editor/commands/command-table.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { MenuCapability } from "#shared/api/capabilities.ts";
import type { MenuTable } from "#shared/api/menu.ts";

/** While a hand is at work the menus may lag behind by this much. */
const SETTLE_MS = 150;

/** The window's menus: the command table by group, as things stand. Single steps of the cursor are left out. */
export function menuTable(context: DeskContext, commands: readonly Command<DeskContext>[] = COMMANDS): MenuTable {
  const menus = groupedCommands(commands).map(({ group, commands: own }) => ({
    label: group,
    items: own
      .filter(({ name }) => !name.startsWith("cursor-"))
      .map(({ name, label, keys, enabled }) => ({
        kind: "command" as const,
        name,
        label,
        enabled: enabled(context),
        ...(keys[0] === undefined ? {} : { shortcut: keys[0] }),
      })),
  }));
  return { menus: menus.filter(({ items }) => items.length > 0) };
}

/** Shows the desk's commands in the window's menus, where there are any, and runs the chosen ones; the returned function ends it. */
export function keepMenus(
  menus: MenuCapability | null,
  context: DeskContext,
  commands: readonly Command<DeskContext>[] = COMMANDS,
): () => void {
  if (!menus) return () => {};
  let shown = "";
  let timer: ReturnType<typeof setTimeout> | undefined;
  const stopWatching = effect(() => {
    const table = menuTable(context, commands);
    const text = JSON.stringify(table);
    if (text === shown) return;
    shown = text;
    clearTimeout(timer);
    timer = setTimeout(() => void menus.show(table), SETTLE_MS);
  });
  const stopHearing = menus.onChosen((name) => {
    const chosen = commands.find((command) => command.name === name);
    if (chosen?.enabled(context)) void chosen.perform(context);
  });
  return () => {
    clearTimeout(timer);
    stopWatching();
    stopHearing();
    void menus.show({ menus: [] });
  };
}
