import type { Command } from "#renderer/editor/commands/command.ts";
import { groupedCommands } from "#renderer/editor/commands/command-table.ts";
import { shownShortcut } from "#renderer/editor/commands/shortcut.ts";

/** The keys of a command table, by group. */
export function KeyGroups<Context>({ commands }: { readonly commands: readonly Command<Context>[] }) {
  return (
    <>
      {groupedCommands(commands).map(({ group, commands: members }) => (
        <section key={group}>
          <h3>{group}</h3>
          <dl class="key-list">
            {members
              .filter((command) => command.keys.length > 0)
              .map((command) => (
                <div key={command.name} class="key-row">
                  <dt>
                    {command.keys.map((key) => (
                      <span key={key} class="key">
                        {shownShortcut(key)}
                      </span>
                    ))}
                  </dt>
                  <dd>{command.label}</dd>
                </div>
              ))}
          </dl>
        </section>
      ))}
    </>
  );
}
