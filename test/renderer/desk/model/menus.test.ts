import { signal } from "@preact/signals";
import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { keepMenus, menuTable } from "#renderer/desk/model/menus.ts";
import type { Command } from "#renderer/editor/commands/command.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { MenuTable } from "#shared/api/menu.ts";

const mayUndo = signal(false);
const done: string[] = [];
const context = {} as DeskContext;
const commands: Command<DeskContext>[] = [
  {
    name: "undo",
    group: "History",
    label: "Undo",
    keys: ["Ctrl+Z", "U"],
    enabled: () => mayUndo.value,
    perform: () => void done.push("undo"),
  },
  { name: "cursor-left", group: "Go", label: "Left", keys: ["ArrowLeft"], enabled: () => true, perform: () => {} },
  {
    name: "mark",
    group: "History",
    label: "Name this point",
    keys: [],
    enabled: () => true,
    perform: () => void done.push("mark"),
  },
];

beforeEach(() => {
  vi.useFakeTimers();
  mayUndo.value = false;
  done.length = 0;
});
afterEach(() => vi.useRealTimers());

function kept() {
  const shown: MenuTable[] = [];
  let choose: (name: string) => void = () => {};
  const deaf = vi.fn();
  const menus = {
    show: async (table: MenuTable) => void shown.push(table),
    onChosen: (listener: (name: string) => void) => {
      choose = listener;
      return deaf;
    },
  };
  const end = keepMenus(menus, context, commands);
  return { shown, choose: (name: string) => choose(name), deaf, end };
}

describe("the window's menus", () => {
  it("hold the command table by group, with label, first key and whether it can be done now; the cursor's steps are left out", () => {
    expect(menuTable(context, commands)).toEqual({
      menus: [
        {
          label: "History",
          items: [
            { kind: "command", name: "undo", label: "Undo", shortcut: "Ctrl+Z", enabled: false },
            { kind: "command", name: "mark", label: "Name this point", enabled: true },
          ],
        },
      ],
    });
  });

  it("follow what can be done, once things have settled, and are not shown anew when nothing changed", () => {
    const { shown } = kept();
    expect(shown).toHaveLength(0);
    vi.advanceTimersByTime(200);
    for (let i = 0; i < 5; i += 1) mayUndo.value = i % 2 === 0;
    expect(shown).toHaveLength(1);
    vi.advanceTimersByTime(200);
    expect(shown).toHaveLength(2);
    expect(shown[1]!.menus[0]!.items[0]).toMatchObject({ name: "undo", enabled: true });
  });

  it("run the chosen command when it can be done, and nothing else", () => {
    const { choose } = kept();
    for (const name of ["undo", "mark", "none"]) choose(name);
    mayUndo.value = true;
    choose("undo");
    expect(done).toEqual(["mark", "undo"]);
  });

  it("are emptied, and not listened to any more, when the desk is left", () => {
    const { shown, end, deaf } = kept();
    end();
    vi.advanceTimersByTime(500);
    expect(shown).toEqual([{ menus: [] }]);
    expect(deaf).toHaveBeenCalledOnce();
  });

  it("are left alone where the shell has none", () => {
    expect(() => keepMenus(null, context)()).not.toThrow();
  });
});
