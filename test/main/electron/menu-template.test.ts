import { describe, expect, it } from "vitest";
import { menuTemplate, shownAccelerator } from "#main/electron/menu-template.ts";
import type { MenuTable } from "#shared/api/menu.ts";

const table: MenuTable = {
  menus: [
    {
      label: "Edit",
      items: [
        { kind: "command", name: "undo", label: "Undo", shortcut: "Ctrl+Z", enabled: true },
        { kind: "line" },
        { kind: "command", name: "cut", label: "Cut strand", enabled: false },
      ],
    },
  ],
};

describe("the application menu", () => {
  it("shows the page's commands and hands the chosen one's name back", () => {
    const chosen: string[] = [];
    const [edit] = menuTemplate(table, "linux", (name) => void chosen.push(name));
    const items = edit!.submenu as { label?: string; type?: string; enabled?: boolean; click?: () => void }[];
    expect(items.map(({ label, type, enabled }) => label ?? type ?? enabled)).toEqual(["Undo", "separator", "Cut strand"]);
    expect(items[2]!.enabled).toBe(false);
    items[0]!.click!();
    expect(chosen).toEqual(["undo"]);
  });

  it("shows shortcuts without acting on them, since the page does", () => {
    const [edit] = menuTemplate(table, "linux", () => {});
    expect((edit!.submenu as object[])[0]).toMatchObject({ accelerator: "Ctrl+Z", registerAccelerator: false });
  });

  it("puts the page's words for keys into the menu's, and shows none that a menu could not read", () => {
    const shown = (shortcut: string) => shownAccelerator(shortcut, "linux");
    expect(["Ctrl+Shift+Z", "ArrowUp", "Alt+ArrowLeft", "?", "Space", "Enter", "+", "Ctrl++", "F1", "["].map(shown)).toEqual([
      "Ctrl+Shift+Z",
      "Up",
      "Alt+Left",
      "?",
      "Space",
      "Return",
      "Plus",
      "Ctrl+Plus",
      "F1",
      "[",
    ]);
    for (const shortcut of ["", "\u00e4", "Hyper+X", "F99", "Ctrl+"])
      expect([shortcut, shown(shortcut)]).toEqual([shortcut, null]);
    expect(shownAccelerator("Ctrl+Z", "darwin")).toBeNull();
  });

  it("begins with the application's own menu where the system has one", () => {
    expect(menuTemplate(table, "darwin", () => {})[0]).toEqual({ role: "appMenu" });
    expect(menuTemplate(table, "win32", () => {})[0]!.label).toBe("Edit");
  });
});
