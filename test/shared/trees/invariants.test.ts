import { describe, expect, it } from "vitest";
import type { TreeDocument } from "#shared/trees/document.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { at, fork, twoTrees } from "./drawn-tree.ts";

type Tables = { -readonly [K in keyof TreeDocument]: TreeDocument[K] };

function broken(change: (d: Tables) => void): string[] {
  const d: Tables = { ...twoTrees() };
  change(d);
  return brokenInvariants(d);
}

const put = <K extends string, V>(map: ReadonlyMap<K, V>, id: K, more: object) =>
  new Map(map).set(id, { ...map.get(id)!, ...more });

describe("a broken document", () => {
  it("is told from a sound one", () => {
    expect(brokenInvariants(fork())).toEqual([]);
    expect(brokenInvariants(twoTrees())).toEqual([]);
  });
  it.each<[string, (d: Tables) => void, RegExp]>([
    [
      "a root that is no node of the tree",
      (d) => {
        d.trees = put(d.trees, "t1", { root: "n5" });
      },
      /t1: its root n5/,
    ],
    [
      "a node of no tree",
      (d) => {
        d.nodes = put(d.nodes, "n1", { tree: "t9" });
      },
      /node n1: its tree t9/,
    ],
    [
      "a strand across two trees",
      (d) => {
        d.strands = put(d.strands, "s3", { to: "n6" });
      },
      /s3 of t1 ends at n6 of t2/,
    ],
    [
      "a strand to nowhere",
      (d) => {
        d.strands = put(d.strands, "s3", { to: "n60", curve: null });
      },
      /s3: its node n60 is not there/,
    ],
    [
      "legs that do not fit the pins",
      (d) => {
        d.strands = put(d.strands, "s3", { legs: ["guide", "guide"] });
      },
      /legs and pins/,
    ],
    [
      "a curve that is not there",
      (d) => {
        d.strands = put(d.strands, "s3", { curve: "c99" });
      },
      /curve c99 is not there/,
    ],
    [
      "a node moved off its curve",
      (d) => {
        d.nodes = put(d.nodes, "n4", { position: at(6, 5, 0.000001) });
      },
      /does not end at n4/,
    ],
    [
      "a position that is no number",
      (d) => {
        d.nodes = put(d.nodes, "n4", { position: at(6, Number.NaN, 0) });
      },
      /not finite/,
    ],
    [
      "a record under another id",
      (d) => {
        d.nodes = put(d.nodes, "n4", { id: "n5" });
      },
      /n4 calls itself n5/,
    ],
    [
      "a dismissal under another key",
      (d) => {
        d.dismissals = new Map([["a", { key: "b", reason: "" }]]);
      },
      /dismissal a/,
    ],
  ])("with %s is named", (_, change, message) => {
    expect(broken(change).join("; ")).toMatch(message);
  });
  it("is not one that merely has findings: no root, a loop, pieces apart", () => {
    expect(
      broken((d) => {
        d.trees = put(d.trees, "t1", { root: null });
      }),
    ).toEqual([]);
    expect(
      broken((d) => {
        d.strands = new Map([...d.strands].filter(([id]) => id !== "s2"));
      }),
    ).toEqual([]);
  });
});
