import { describe, expect, it } from "vitest";
import type { Client } from "#renderer/client/client.ts";
import { lookAtTrees } from "#renderer/desk/model/look-at-trees.ts";
import { nameOfChosenFile, openSides } from "#renderer/study/side-by-side/sides.ts";
import type { PassSummary, ShelfSpecimen, SpecimenRecord } from "#shared/api/specimen.ts";
import { PassHistory } from "#shared/log/history.ts";

const specimen = {
  id: "s1",
  name: "HB-07",
  volume: { sha256: "a".repeat(64), frame: "LPS", spacing: [0.1, 0.1, 0.1] },
} as unknown as SpecimenRecord;
const pass = { id: "p1", annotator: "AN-1", number: 1 } as PassSummary;

const file = (frame: string) =>
  new TextEncoder().encode(
    JSON.stringify({
      format: "chordae-trees",
      version: 1,
      unit: "mm",
      frame,
      trees: [
        {
          id: "t1",
          name: "ALPM-01",
          root: "n1",
          nodes: [
            { id: "n1", kind: "origin", position: [0, 0, 0] },
            { id: "n2", kind: "insertion", position: [0, 0, 5] },
          ],
          strands: [{ id: "s1", from: "n1", to: "n2" }],
        },
      ],
    }),
  );

/** A library with one specimen and one pass whose log has these lines. */
function clientWith(lines: readonly string[]): Client {
  return {
    shelf: async () => ({ specimens: [{ specimen, passes: [pass], incomplete: false } as ShelfSpecimen], problems: [] }),
    readLog: async () => ({ lines }),
  } as unknown as Client;
}

describe("the two sides", () => {
  it("can be a tree file of the same specimen, chosen in this page, with what one should know of it", async () => {
    const name = nameOfChosenFile(lookAtTrees(file("LPS"), "mine.chordae.json", specimen));
    const sides = await openSides(clientWith([]), "s1", name, name);
    expect(sides.a.label).toBe("mine.chordae.json");
    expect(sides.a.plain.trees.map((tree) => tree.name)).toEqual(["ALPM-01"]);
    expect(sides.a.caution).toMatch(/does not say which scan/);
    expect(sides.names).toEqual({ a: name, b: name });
  });

  it("ask for a file again that this page never saw", async () => {
    await expect(openSides(clientWith([]), "s1", "p1", "file~other.json")).rejects.toThrow(/other\.json.*Choose it again/);
  });

  it("say which is missing: the specimen or the pass", async () => {
    await expect(openSides(clientWith([]), "s2", "p1", "p1")).rejects.toThrow(/specimen is not in the library/);
    await expect(openSides(clientWith([]), "s1", "p7", "p7")).rejects.toThrow(/pass of HB-07 is not in the library/);
  });

  it("name the pass whose log cannot be read", async () => {
    expect(() => PassHistory.fromLines(["{"], "x")).toThrow();
    await expect(openSides(clientWith(["{"]), "s1", "p1", "p1")).rejects.toThrow(/AN-1, pass 1/);
  });
});
