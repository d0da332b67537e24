import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { smallestGap } from "#test/shared/phantom/gaps.ts";

const valve = demoValve();
const strands = valve.truth.trees.flatMap((tree) => tree.strands);
const nodes = valve.truth.trees.flatMap((tree) => tree.nodes);

describe("the demo valve HB-07", () => {
  it("has 20 trees of two muscles, a torn chorda, a false one, wall-born ones and a cross-link", () => {
    expect(valve.truth.trees.length).toBe(20);
    expect(new Set(valve.truth.trees.map((tree) => tree.name)).size).toBe(20);
    const kinds = nodes.map((node) => node.kind);
    const count = (kind: string) => kinds.filter((other) => other === kind).length;
    expect([count("ruptured"), count("wall-end"), count("origin")]).toEqual([1, 1, 20]);
    expect(nodes.filter((node) => node.site === "wall").length).toBe(2);
    expect(valve.truth.crossLinks?.length).toBe(1);
    expect(new Set(nodes.filter((node) => node.kind === "insertion").map((node) => node.leaflet))).toEqual(
      new Set(["anterior", "posterior", "commissure"]),
    );
  });

  it("has struts of 2 mm and twigs of 0.15 mm", () => {
    const radii = strands.flatMap((strand) => strand.radii as number[]);
    expect(Math.max(...radii)).toBe(1);
    expect(Math.min(...radii)).toBe(0.075);
    expect(strands.filter((strand) => strand.strut).length).toBe(2);
  });

  it("is valid and sound, with its passes", () => {
    for (const file of [valve.truth, ...valve.passes.map((pass) => pass.file)]) {
      expect(() => checkChordaeFile(file, "f")).not.toThrow();
      expect(brokenInvariants(documentFromFile(file))).toEqual([]);
      expect(file.synthetic).toBe(true);
    }
    expect(valve.passes.map((pass) => pass.annotator)).toEqual(["AN-1", "AN-2", "AN-3"]);
    expect(valve.errors.map((error) => error.event)).toEqual(["missed-branch", "exchanged-tails", "moved-fork", "short-end"]);
  });

  it("keeps trees apart except the pairs that touch on purpose", () => {
    const treeOf = new Map(valve.truth.trees.flatMap((tree) => tree.strands.map((strand) => [strand.id, tree.name!] as const)));
    const pair = (a: string, b: string) => [treeOf.get(a), treeOf.get(b)].sort().join(" ");
    const meant = ["ALPM-06 ALPM-07", "PMPM-06 PMPM-07"];
    expect(smallestGap(valve.truth, (a, b) => meant.includes(pair(a, b)))).toBeGreaterThan(0.15);
    for (const name of meant) expect(Math.abs(smallestGap(valve.truth, (a, b) => pair(a, b) !== name))).toBeLessThan(0.15);
  });

  it("keeps the cross-link clear of every tree but the two it joins", () => {
    const [link] = valve.truth.crossLinks!;
    const joined = new Set(nodes.filter((node) => node.id === link!.from || node.id === link!.to));
    for (const tree of valve.truth.trees) {
      if (tree.nodes.some((node) => joined.has(node))) continue;
      const alone = { ...valve.truth, trees: [tree, { id: "link", root: null, nodes: [], strands: [link!] }] };
      expect(smallestGap(alone, () => false)).toBeGreaterThan(0.1);
    }
  });

  it("has passes that differ from the truth by exactly the listed events", () => {
    const options = { preset: "geometry", origin: "held", positionScale: 2, merge: 0.3, tolerance: 0.5 } as const;
    for (const { annotator, file } of valve.passes) {
      const found = compareSets(valve.truth, file, { ...options, minimumDiameter: null, step: 0.05 }, () => 20);
      const events = found.pairs.flatMap((pair) => pair.events.map((event) => event.event)).sort();
      expect(events).toEqual(
        valve.errors
          .filter((error) => error.annotator === annotator)
          .map((error) => error.event)
          .sort(),
      );
      expect(found.crossLinks).toEqual({ matched: [["x1", "x1"]], onlyA: [], onlyB: [] });
    }
  });

  it("stands upright, with the antero-lateral muscle on the left of the body", () => {
    const axes = valveAxes(valve.landmarks)!;
    expect(axes.up[2]).toBeGreaterThan(0.95);
    expect(axes.toAnteroLateral[0]).toBeGreaterThan(0.9);
  });

  it("shows strings above the background along their true axes", () => {
    const [nx, ny] = valve.grid.size;
    const z = 180;
    const slice = new Uint16Array(nx * ny);
    valve.renderSlab(z, z + 1, slice);
    const height = valve.grid.origin[2] + z * valve.grid.spacing[2];
    let seen = 0;
    for (const strand of strands)
      for (const [i, p] of strand.points!.entries()) {
        if (Math.abs(p[2] - height) > 0.05 || (strand.radii![i] ?? 0) < 0.1) continue;
        const column = Math.round((p[0] - valve.grid.origin[0]) / valve.grid.spacing[0]);
        const row = Math.round((p[1] - valve.grid.origin[1]) / valve.grid.spacing[1]);
        seen += 1;
        // Half the contrast of the thinnest string here, six standard deviations of the noise above the background.
        expect(slice[row * nx + column]!).toBeGreaterThan(9000 + 6 * 1080);
      }
    expect(seen).toBeGreaterThan(15);
  });
});
