import Graph from "graphology";
import { parse } from "graphology-graphml";
import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { readGraphml } from "#shared/formats/graphml/read-graphml.ts";
import { graphmlLosses, writeGraphml } from "#shared/formats/graphml/write-graphml.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

const taken = (value: unknown) => parseChordaeFile(JSON.stringify(value), "f");

describe("GraphML", () => {
  it("is read by an independent graph library with the same nodes, edges and values", () => {
    const { truth } = blockPhantom({ name: "p", seed: 4, size: [64, 64, 64], spacingMm: 0.04, trees: 1, noise: 0 });
    const graph = parse(Graph, writeGraphml(truth));
    const nodes = truth.trees.flatMap((tree) => tree.nodes);
    const strands = truth.trees.flatMap((tree) => tree.strands);
    expect([graph.order, graph.size, graph.type]).toEqual([nodes.length, strands.length, "undirected"]);
    for (const node of nodes) {
      const found = graph.getNodeAttributes(node.id);
      expect([found.x, found.y, found.z]).toEqual(node.position);
      expect([found.kind, found.tree]).toEqual([node.kind, "t1"]);
    }
    for (const strand of strands) {
      const found = graph.getEdgeAttributes(strand.id);
      expect(graph.extremities(strand.id)).toEqual([strand.from, strand.to]);
      expect(JSON.parse(found.points)).toEqual(strand.points);
      const length = strand
        .points!.slice(1)
        .reduce((sum, p, k) => sum + Math.hypot(...p.map((c, a) => c - strand.points![k]![a]!)), 0);
      expect(found.length).toBeCloseTo(length, 5);
      expect(found.kind).toBe("strand");
    }
  });

  it("comes back with nodes, labels, strands, pins, radii and cross-links", () => {
    const file = taken(sampleFile());
    const { file: back, notes } = readGraphml(writeGraphml(file), "f.graphml");
    expect(notes).toEqual([]);
    const { colour: _colour, ...tree } = sampleFile().trees[0];
    const { support: _support, ...fork } = tree.nodes[1];
    const { spread: _spread, ...strand } = tree.strands[0];
    expect(back.trees).toEqual([
      { ...tree, nodes: [tree.nodes[0], fork, ...tree.nodes.slice(2)], strands: [strand, ...tree.strands.slice(1)] },
    ]);
    expect(back.crossLinks).toEqual(sampleFile().crossLinks);
    expect(back).toMatchObject({ frame: "LPS", annotator: "AN-1", pass: 1, radii: "blur-corrected" });
    expect(back.volume).toEqual({ name: "HB-07", sha256: "ab".repeat(32) });
    expect(graphmlLosses(file).length).toBe(4);
  });

  it("keeps ids that XML cannot take, and text of any kind", () => {
    const value = sampleFile();
    const tree = value.trees[0];
    tree.name = `<a & "b"> &#65; ü`;
    tree.nodes[3].id = "end / 4";
    tree.strands[2].to = "end / 4";
    value.crossLinks[0].to = "end / 4";
    const text = writeGraphml(taken(value));
    expect(parse(Graph, text).order).toBe(4);
    const { file } = readGraphml(text, "f");
    expect(file.trees[0]!.name).toBe(tree.name);
    expect(file.trees[0]!.nodes[3]!.id).toBe("end / 4");
    expect(file.crossLinks![0]!.to).toBe("end / 4");
  });

  it("reads another program's graph whose nodes carry x, y, z", () => {
    const text = `<?xml version="1.0"?><g:graphml xmlns:g="http://graphml.graphdrawing.org/xmlns">
      <g:key id="d0" for="node" attr.name="X" attr.type="double"/><g:key id="d1" for="node" attr.name="Y" attr.type="double"/>
      <g:key id="d2" for="node" attr.name="Z" attr.type="double"><g:default>1.5</g:default></g:key>
      <g:key id="d3" for="node" attr.name="kind" attr.type="string"/>
      <g:graph edgedefault="directed">
        <g:node id="a"><g:data key="d0">0</g:data><g:data key="d1">0</g:data><g:data key="d3">soma</g:data></g:node>
        <g:node id="b"><g:data key="d0">0</g:data><g:data key="d1">2</g:data></g:node>
        <g:node id="c"><g:data key="d0">1</g:data><g:data key="d1">4e0</g:data></g:node>
        <g:node id="d"><g:data key="d0">-1</g:data><g:data key="d1">4</g:data></g:node>
        <g:node id="lone"><g:data key="d0">9</g:data><g:data key="d1">9</g:data></g:node>
        <g:edge source="a" target="b"/><g:edge source="b" target="c"/><g:edge source="b" target="d"/>
      </g:graph></g:graphml>`;
    const { file, notes } = readGraphml(text, "other.graphml");
    expect(file.trees.length).toBe(2);
    expect(file.trees[0]).toMatchObject({ root: "a" });
    expect(file.trees[0]!.nodes.map((node) => [node.id, node.kind, ...node.position])).toEqual([
      ["a", "origin", 0, 0, 1.5],
      ["b", "fork", 0, 2, 1.5],
      ["c", "open", 1, 4, 1.5],
      ["d", "open", -1, 4, 1.5],
    ]);
    expect(file.frame).toBeUndefined();
    expect(notes.join(" ")).toMatch(/millimetres/);
  });

  const node = (inside: string) => `<graphml><graph edgedefault="undirected">${inside}</graph></graphml>`;
  it.each([
    ["a DOCTYPE", `<!DOCTYPE graphml [<!ENTITY a "b">]>${node("")}`, /DOCTYPE/],
    ["an entity bomb", `<!DOCTYPE x [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;">]><graphml>&b;</graphml>`, /DOCTYPE/],
    ["another root", "<svg/>", /<graphml>/],
    ["nothing", "", /empty/],
    ["text", "hello", /XML/],
    ["cut XML", "<graphml><graph>", /well-formed|XML/],
    ["no graph", "<graphml/>", /one <graph>, found 0/],
    ["two graphs", "<graphml><graph/><graph/></graphml>", /one <graph>, found 2/],
    ["a node without a place", node('<node id="a"/>'), /node a/],
    [
      "a place that is no number",
      node('<node id="a"><data key="x">1</data><data key="y">b</data><data key="z">1</data></node>'),
      /'b'/,
    ],
    ["an edge to nowhere", node('<edge source="a" target="b"/>'), /edge 1, source/],
    ["deep nesting", `${"<a>".repeat(5000)}${"</a>".repeat(5000)}`, /nest/i],
  ])("refuses %s in one sentence", (_, text, says) => {
    try {
      readGraphml(text, "bad.graphml");
      throw new Error("taken");
    } catch (error) {
      if (!isTautlineError(error, "unreadable-input")) throw error;
      expect(error.message).toMatch(says);
      expect(error.message).toContain("bad.graphml");
    }
  });

  it("refuses every cut of a file without any other fault", () => {
    const text = writeGraphml(taken(sampleFile()));
    for (let end = 0; end < text.length - 12; end += 97) {
      try {
        readGraphml(text.slice(0, end), "cut");
        throw new Error(`taken at ${end}`);
      } catch (error) {
        if (!isTautlineError(error, "unreadable-input")) throw error;
      }
    }
  });
});
