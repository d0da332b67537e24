import { useEffect, useRef, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { COMMANDS } from "#renderer/editor/commands/command-table.ts";
import { matching } from "#renderer/editor/commands/match-commands.ts";
import { shownShortcut } from "#renderer/editor/commands/shortcut.ts";

/** Every command by a few letters of its name. */
export function Palette({ context, close }: DeskSheetProps) {
  const [text, setText] = useState("");
  const [at, setAt] = useState(0);
  const list = useRef<HTMLUListElement>(null);
  const shown = matching(COMMANDS, text);
  const chosen = Math.min(at, shown.length - 1);
  useEffect(() => {
    list.current?.querySelector("[aria-selected=true]")?.scrollIntoView({ block: "nearest" });
  }, [chosen, text]);

  const run = (index: number) => {
    const command = shown[index];
    if (command === undefined || !command.enabled(context)) return;
    close();
    // After the sheet gave focus back to where it was.
    setTimeout(() => void command.perform(context), 0);
  };
  const key = (event: KeyboardEvent) => {
    const by = { ArrowDown: 1, ArrowUp: -1, PageDown: 8, PageUp: -8 }[event.key];
    if (by !== undefined) {
      event.preventDefault();
      setAt(Math.min(shown.length - 1, Math.max(0, chosen + by)));
    } else if (event.key === "Enter") {
      event.preventDefault();
      run(chosen);
    }
  };
  return (
    <Sheet title="All commands" close={close} kind="palette">
      <input
        class="field palette-text"
        role="combobox"
        aria-expanded="true"
        aria-controls="palette-list"
        aria-activedescendant={shown[chosen] === undefined ? "" : `palette-${shown[chosen].name}`}
        aria-label="Command"
        placeholder="Type a few letters"
        value={text}
        onInput={(event) => {
          setText(event.currentTarget.value);
          setAt(0);
        }}
        onKeyDown={key}
      />
      <ul class="palette-list" id="palette-list" role="listbox" aria-label="Commands" ref={list}>
        {shown.map((command, i) => (
          <li
            key={command.name}
            id={`palette-${command.name}`}
            role="option"
            aria-selected={i === chosen}
            aria-disabled={!command.enabled(context)}
            onClick={() => run(i)}
          >
            <span class="soft palette-group">{command.group}</span>
            <span>{command.label}</span>
            <span class="spring" />
            {command.keys[0] === undefined ? null : <span class="key">{shownShortcut(command.keys[0])}</span>}
          </li>
        ))}
      </ul>
      {shown.length === 0 ? <p class="empty">No command has these letters.</p> : null}
    </Sheet>
  );
}
