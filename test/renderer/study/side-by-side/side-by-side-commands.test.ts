import { describe, expect, it } from "vitest";
import { COMMANDS, commandFor } from "#renderer/editor/commands/command-table.ts";
import { SIDE_BY_SIDE_COMMANDS, sideBySideCommandFor } from "#renderer/study/side-by-side/side-by-side-commands.ts";

const repeated = (list: readonly string[]) => list.filter((item, i) => list.indexOf(item) !== i);
const press = (key: string, shiftKey = false) => ({ key, shiftKey, ctrlKey: false, metaKey: false, altKey: false });

describe("the commands of side by side", () => {
  it("have one name and one key each", () => {
    expect(repeated(SIDE_BY_SIDE_COMMANDS.map((command) => command.name))).toEqual([]);
    expect(repeated(SIDE_BY_SIDE_COMMANDS.flatMap((command) => command.keys))).toEqual([]);
  });

  it("step with the keys that step through findings on the desk", () => {
    expect(sideBySideCommandFor(press("q"))?.name).toBe("next-difference");
    expect(sideBySideCommandFor(press("Q", true))?.name).toBe("previous-difference");
    expect(commandFor(press("q"))?.name).toBe("next-finding");
  });

  it("share with the desk only keys that do the like there", () => {
    const desk = new Map(COMMANDS.flatMap((command) => command.keys.map((key) => [key, command.name] as const)));
    const shared = SIDE_BY_SIDE_COMMANDS.filter((command) => command.group !== "See").flatMap((command) =>
      command.keys.filter((key) => desk.has(key)).map((key) => [command.name, desk.get(key)]),
    );
    expect(shared).toEqual([
      ["next-difference", "next-finding"],
      ["previous-difference", "previous-finding"],
      ["stop-comparing", "leave"],
      ["export-comparison", "export"],
      ["choose-sides", "take-in-trees"],
      ["key-help", "key-help"],
    ]);
  });

  it("use a key that changes what is seen for nothing else than the desk does", () => {
    const seen = COMMANDS.filter((command) => command.group === "See");
    for (const command of seen) {
      expect(SIDE_BY_SIDE_COMMANDS.find((one) => one.name === command.name)?.keys).toEqual(command.keys);
    }
  });
});
