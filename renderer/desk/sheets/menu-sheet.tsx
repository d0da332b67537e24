import { Sheet } from "#renderer/app/sheet.tsx";
import { RecoveredList } from "#renderer/desk/sheets/recovered-list.tsx";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { COMMANDS, groupedCommands } from "#renderer/editor/commands/command-table.ts";
import { shownShortcut } from "#renderer/editor/commands/shortcut.ts";

/** Every command by group, to be clicked; those that can do nothing now are greyed. Single steps of the cursor are left out. */
export function MenuSheet({ model, context, close }: DeskSheetProps) {
  const groups = groupedCommands(COMMANDS).map(({ group, commands }) => ({
    group,
    commands: commands.filter((command) => !command.name.startsWith("cursor-")),
  }));
  return (
    <Sheet title="All commands" close={close} kind="wide-sheet">
      <RecoveredList model={model} close={close} />
      <div class="menu-columns">
        {groups.map(({ group, commands }) => (
          <section key={group}>
            <h3>{group}</h3>
            {commands.map((command) => (
              <button
                key={command.name}
                type="button"
                class="button plain menu-row"
                disabled={!command.enabled(context)}
                onClick={() => {
                  close();
                  void command.perform(context);
                }}
              >
                <span>{command.label}</span>
                {command.keys[0] === undefined ? null : <span class="key">{shownShortcut(command.keys[0])}</span>}
              </button>
            ))}
          </section>
        ))}
      </div>
    </Sheet>
  );
}
