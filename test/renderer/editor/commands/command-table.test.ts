import { describe, expect, it } from "vitest";
import { COMMANDS, commandFor, groupedCommands, keyListMarkdown } from "#renderer/editor/commands/command-table.ts";
import { matching } from "#renderer/editor/commands/match-commands.ts";
import { shownShortcut, textOfPress } from "#renderer/editor/commands/shortcut.ts";
import { nextSlab } from "#renderer/editor/commands/view-commands.ts";

const press = (key: string, held: Partial<Record<"ctrlKey" | "metaKey" | "altKey" | "shiftKey", boolean>> = {}) => ({
  key,
  ctrlKey: false,
  metaKey: false,
  altKey: false,
  shiftKey: false,
  ...held,
});
const repeated = (list: readonly string[]) => list.filter((item, i) => list.indexOf(item) !== i);

describe("the command table", () => {
  it("has one command per name and per key", () => {
    expect(repeated(COMMANDS.map((command) => command.name))).toEqual([]);
    expect(repeated(COMMANDS.flatMap((command) => command.keys))).toEqual([]);
  });

  it("writes every key in the form in which a key press reads", () => {
    for (const key of COMMANDS.flatMap((command) => command.keys)) {
      const parts = key.split(/\+(?=.)/);
      const last = parts.at(-1)!;
      const pressed = press(last === "Space" ? " " : last, {
        ctrlKey: parts.includes("Ctrl"),
        altKey: parts.includes("Alt"),
        shiftKey: parts.includes("Shift"),
      });
      expect(textOfPress(pressed)).toBe(key);
      expect(commandFor(pressed)?.keys).toContain(key);
    }
  });

  it("reaches every command that ends a strand by a single letter", () => {
    const ends = COMMANDS.filter((command) => command.name.startsWith("end-"));
    expect(ends).toHaveLength(7);
    for (const command of ends) expect(command.keys).toEqual([expect.stringMatching(/^[A-Z]$/)]);
  });

  it("leaves no command out of the groups, and no key out of the written list", () => {
    expect(groupedCommands(COMMANDS).flatMap((entry) => entry.commands)).toHaveLength(COMMANDS.length);
    const list = keyListMarkdown();
    for (const command of COMMANDS) if (command.keys.length > 0) expect(list).toContain(`| ${command.label} |`);
  });

  it("does not take keys that the browser or the system keeps for itself", () => {
    const kept = [
      "Ctrl+T",
      "Ctrl+W",
      "Ctrl+N",
      "Ctrl+Q",
      "Ctrl+R",
      "F5",
      "F11",
      "F12",
      "Tab",
      "Shift+Tab",
      "Ctrl+C",
      "Ctrl+V",
      "Ctrl+X",
    ];
    const taken = COMMANDS.flatMap((command) => command.keys);
    expect(taken.filter((key) => kept.includes(key))).toEqual([]);
  });
});

describe("key presses as text", () => {
  it("names modifiers in one order and counts the command key as control", () => {
    expect(textOfPress(press("z", { ctrlKey: true }))).toBe("Ctrl+Z");
    expect(textOfPress(press("z", { metaKey: true, shiftKey: true }))).toBe("Ctrl+Shift+Z");
    expect(textOfPress(press("ArrowLeft", { altKey: true }))).toBe("Alt+ArrowLeft");
  });

  it("does not name shift with a character that the layout may need it for", () => {
    expect(textOfPress(press("?", { shiftKey: true }))).toBe("?");
    expect(textOfPress(press("+", { shiftKey: true }))).toBe("+");
  });

  it("is empty for a modifier alone", () => {
    expect(textOfPress(press("Shift", { shiftKey: true }))).toBe("");
  });

  it("is shown with signs for arrows, and a plus key as itself", () => {
    expect(shownShortcut("Shift+ArrowUp")).toBe("Shift + ↑");
    expect(shownShortcut("+")).toBe("+");
  });
});

describe("finding commands by letters", () => {
  it("wants every word, and puts beginnings of words first", () => {
    const names = matching(COMMANDS, "branch").map((command) => command.name);
    expect(names).toContain("branch");
    expect(names).toContain("move-branch");
    expect(matching(COMMANDS, "plane acr").map((command) => command.name)).toEqual(["plane-across"]);
    expect(matching(COMMANDS, "no such thing")).toEqual([]);
    expect(matching(COMMANDS, "")).toHaveLength(COMMANDS.length);
  });
});

describe("slab steps", () => {
  it("go up and down through fixed thicknesses and stop at both ends", () => {
    expect(nextSlab(0.4, 1)).toBe(0.8);
    expect(nextSlab(0.5, -1)).toBe(0.4);
    expect(nextSlab(0, -1)).toBe(0);
    expect(nextSlab(3, 1)).toBe(3);
  });
});
