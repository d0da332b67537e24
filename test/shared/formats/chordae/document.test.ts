import { describe, expect, it } from "vitest";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

const taken = (file: unknown) => parseChordaeFile(JSON.stringify(file), "f");

describe("a file as a document and back", () => {
  it("is the same file, with unknown keys of the file, trees, nodes, strands and landmarks", () => {
    const file = taken(sampleFile());
    const document = documentFromFile(file);
    expect(brokenInvariants(document)).toEqual([]);
    expect(fileFromDocument(document, file)).toEqual(sampleFile());
  });

  it("keeps what was measured apart from what never was", () => {
    const [first, , third] = fileFromDocument(documentFromFile(taken(sampleFile())), {}).trees[0]!.strands;
    expect(first!.radii).toEqual([0.5, null, 0.4]);
    expect(third).not.toHaveProperty("radii");
  });

  it("keeps ids of the log's form and numbers the others above them", () => {
    const file = sampleFile();
    const tree = file.trees[0];
    tree.id = "valve/left";
    tree.nodes[0].id = "Wurzel 1";
    tree.root = "Wurzel 1";
    tree.strands[0].from = "Wurzel 1";
    tree.nodes[3].id = "n007";
    tree.strands[2].to = "n007";
    file.crossLinks[0].to = "n007";
    delete tree.name;
    const document = documentFromFile(taken(file));
    expect(brokenInvariants(document)).toEqual([]);
    expect([...document.nodes.keys()].sort()).toEqual(["n2", "n3", "n4", "n5"]);
    expect(document.trees.get("t1")).toMatchObject({ name: "valve/left", root: "n4" });
    expect(document.strands.get("s1")).toMatchObject({ from: "n4", to: "n2" });
    expect(document.crossLinks.get("x1")).toMatchObject({ from: "n3", to: "n5" });
  });

  it("ends centrelines exactly at their nodes and rounds to 1e-6 mm", () => {
    const file = sampleFile();
    file.trees[0].nodes[1].position = [0.00000049, 0, 4.0000004];
    file.trees[0].strands[0].points[1] = [0.12345678, 0, 2];
    const document = documentFromFile(taken(file));
    expect(brokenInvariants(document)).toEqual([]);
    expect(document.nodes.get("n2")!.position).toEqual([0, 0, 4]);
    expect(Array.from(document.curves.get("c1")!.points)).toEqual([0, 0, 0, 0.123457, 0, 2, 0, 0, 4]);
  });

  it("does not depend on the order in which records came", () => {
    const document = documentFromFile(taken(sampleFile()));
    const turned = {
      ...document,
      trees: new Map([...document.trees].reverse()),
      nodes: new Map([...document.nodes].reverse()),
      strands: new Map([...document.strands].reverse()),
    };
    const header = { annotator: "AN-1" };
    expect(writeChordaeFile(fileFromDocument(turned, header))).toBe(writeChordaeFile(fileFromDocument(document, header)));
  });
});
