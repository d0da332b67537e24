import { describe, expect, it } from "vitest";
import { byCounter, countersOf, IdSource, isIdOf, NO_IDS_YET, raised } from "#shared/trees/ids.ts";
import { nextTreeName, treeNamed } from "#shared/trees/names.ts";
import { twoTrees } from "./drawn-tree.ts";

describe("ids", () => {
  it("are a letter and a positive counter", () => {
    for (const good of ["n1", "n12", "n999999999999999"]) expect(isIdOf("node", good)).toBe(true);
    for (const bad of ["n0", "n01", "n", "n-1", "n1.5", "t1", "N1", "n1 ", "n9999999999999999", 3, null])
      expect(isIdOf("node", bad)).toBe(false);
  });
  it("are sorted by their counters, not as text", () => {
    expect(["n10", "n9", "n2"].sort(byCounter)).toEqual(["n2", "n9", "n10"]);
  });
  it("start above the highest ever used", () => {
    const ids = new IdSource(raised(NO_IDS_YET, ["s7", "s3", "x2", "nonsense"]));
    expect([ids.next("strand"), ids.next("strand"), ids.next("cross-link"), ids.next("tree")]).toEqual(["s8", "s9", "x3", "t1"]);
  });
  it("of a document without a log are counted from its records", () => {
    expect(countersOf(twoTrees())).toMatchObject({ tree: 2, node: 6, strand: 4, "cross-link": 0 });
  });
});

describe("tree names", () => {
  const named = (...names: string[]) => {
    const d = twoTrees();
    return {
      ...d,
      trees: new Map(names.map((name, i) => [`t${i + 1}` as const, { id: `t${i + 1}` as const, name, root: null }])),
    };
  };
  it("count on from the highest of the muscle; gaps are not filled", () => {
    expect(nextTreeName(named("ALPM-01", "ALPM-09", "PMPM-40"), "antero-lateral")).toBe("ALPM-10");
    expect(nextTreeName(named("ALPM-01", "ALPM-09", "PMPM-40"), "postero-medial")).toBe("PMPM-41");
    expect(nextTreeName(named(), "antero-lateral")).toBe("ALPM-01");
    expect(nextTreeName(named("ALPM-99"), "antero-lateral")).toBe("ALPM-100");
  });
  it("without a muscle begin with TREE; names of another form are left alone", () => {
    expect(nextTreeName(named("my tree", "ALPM-x", "XALPM-77"), undefined)).toBe("TREE-01");
    expect(nextTreeName(named("XALPM-77", "alpm-5"), "antero-lateral")).toBe("ALPM-01");
  });
  it("are found", () => {
    expect(treeNamed(named("ALPM-01"), "ALPM-01")).toBe("t1");
    expect(treeNamed(named("ALPM-01"), "ALPM-02")).toBeNull();
  });
});
