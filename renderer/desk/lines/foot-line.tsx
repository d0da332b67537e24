import { Fragment } from "preact";
import type { Command } from "#renderer/editor/commands/command.ts";
import { COMMANDS } from "#renderer/editor/commands/command-table.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import { shownShortcut } from "#renderer/editor/commands/shortcut.ts";
import { END_COMMANDS } from "#renderer/editor/commands/trace-commands.ts";

const ENDS = new Set<Command<DeskContext>>(END_COMMANDS);

/** What a click and the keys do now. There are no modes: this line is where one looks. */
export function FootLine({ context }: { readonly context: DeskContext }) {
  const { editor } = context;
  editor.revision.value;
  const shown = COMMANDS.flatMap((command) => {
    const words = command.foot?.(context) ?? null;
    return words === null ? [] : [{ command, words }];
  });
  const click = shown.find(({ command }) => command.name === "pin");
  const ends = shown.filter(({ command }) => ENDS.has(command));
  const others = shown.filter(({ command }) => command !== click?.command && !ENDS.has(command));
  return (
    <footer class="foot-line" aria-label="What a click and the keys do now">
      {click === undefined ? null : (
        <span class="foot-hint">
          <span class="key">click</span> {click.words}
        </span>
      )}
      {ends.length === 0 ? null : (
        <span class="foot-hint">
          <span class="soft">{editor.endsAtPin() ? "end at the last pin:" : "end here:"}</span>{" "}
          {ends.map(({ command, words }) => (
            <Fragment key={command.name}>
              <span class="key">{shownShortcut(command.keys[0]!)}</span> {words}{" "}
            </Fragment>
          ))}
        </span>
      )}
      {others.map(({ command, words }) => (
        <span key={command.name} class="foot-hint">
          <span class="key">{shownShortcut(command.keys[0]!)}</span> {words}
        </span>
      ))}
      <span class="spring" />
      <span class="foot-hint soft foot-help">
        <span class="key">Alt</span> no snap <span class="key">Ctrl + K</span> all commands <span class="key">?</span> keys
      </span>
    </footer>
  );
}
