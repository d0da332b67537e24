import { describe, expect, it } from "vitest";
import { lookAtTrees } from "#renderer/desk/model/look-at-trees.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";

const HASH = "a".repeat(64);
const OTHER = "b".repeat(64);
const specimen = { name: "HB-07", volume: { sha256: HASH, frame: "LPS" } } as unknown as SpecimenRecord;

function file(volume: unknown, frame = "LPS"): Uint8Array {
  const nodes = [
    { id: "n1", kind: "origin", position: [0, 0, 0] },
    { id: "n2", kind: "insertion", position: [1, 0, 0] },
  ];
  const trees = [{ id: "t1", root: "n1", nodes, strands: [{ id: "s1", from: "n1", to: "n2" }] }];
  return new TextEncoder().encode(JSON.stringify({ format: "chordae-trees", version: 1, unit: "mm", frame, volume, trees }));
}

const volume = (sha256: string | null, derivedFrom?: { sha256: string }) => ({
  name: "X",
  sha256,
  dtype: "uint16",
  size: [4, 4, 4],
  spacing: [1, 1, 1],
  origin: [0, 0, 0],
  direction: [1, 0, 0, 0, 1, 0, 0, 0, 1],
  ...(derivedFrom === undefined ? {} : { derivedFrom }),
});

describe("a tree file held against the specimen", () => {
  it("of the same scan, or of a part of it, is taken without a question", () => {
    expect(lookAtTrees(file(volume(HASH)), "a.json", specimen)).toMatchObject({ scan: "same", sentence: null });
    expect(lookAtTrees(file(volume(OTHER, { sha256: HASH })), "a.json", specimen).scan).toBe("same");
  });

  it("of another scan is asked about, with both named", () => {
    const looked = lookAtTrees(file(volume(OTHER)), "a.json", specimen);
    expect(looked.scan).toBe("other");
    expect(looked.sentence).toContain("HB-07");
    expect(looked.sentence).toContain(OTHER.slice(0, 12));
  });

  it("without a hash is taken with a warning; in another frame it is asked about", () => {
    expect(lookAtTrees(file(null), "a.json", specimen)).toMatchObject({ scan: "unsaid" });
    expect(lookAtTrees(file(volume(HASH), "scan"), "a.json", specimen)).toMatchObject({ scan: "other" });
  });

  it("that is none is refused with its name and what is wrong", () => {
    expect(() => lookAtTrees(new TextEncoder().encode("{}"), "bad.json", specimen)).toThrow("bad.json");
  });
});
