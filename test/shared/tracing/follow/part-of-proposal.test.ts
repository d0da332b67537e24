import { describe, expect, it } from "vitest";
import { pointMm } from "#shared/geometry/types.ts";
import { keptStrands, partOfProposal } from "#shared/tracing/follow/part-of-proposal.ts";
import type { FollowProposal, ProposedNode, ProposedStrand } from "#shared/tracing/follow/proposal.ts";
import type { NodeKind } from "#shared/trees/document.ts";

const node = (id: string, kind: NodeKind, x: number, y: number): ProposedNode => ({
  id,
  kind,
  position: pointMm(x, y, 0),
  certainty: "sure",
  reason: null,
  meets: null,
});
const strand = (id: string, from: ProposedNode, to: ProposedNode, via: number[] = []): ProposedStrand => {
  const at = (share: number) =>
    [0, 1, 2].map((k) => from.position[k as 0]! + (to.position[k as 0]! - from.position[k as 0]!) * share) as [
      number,
      number,
      number,
    ];
  return {
    id,
    from: from.id,
    to: to.id,
    via: via.map((share) => pointMm(...at(share))),
    points: Array.from({ length: 11 }, (_, i) => at(i / 10)).flat(),
    radii: new Array(11).fill(0.2),
    imageFit: 0.9,
    doubtful: [{ first: 2, last: 8, reason: "faint" }],
  };
};

// Y on a Y: r - a - (b - (1, 2), 3); the strands are listed from the far end, so that order cannot help.
const r = node("r", "origin", 0, 0);
const a = node("a", "fork", 0, 10);
const b = node("b", "fork", 5, 15);
const [one, two, three] = [node("1", "insertion", 5, 20), node("2", "insertion", 10, 20), node("3", "insertion", -5, 20)];
const tree: FollowProposal = {
  nodes: [r, a, b, one, two, three],
  strands: [
    strand("b2", b, two),
    strand("b1", b, one, [0.2, 0.8]),
    strand("a3", a, three),
    strand("ab", a, b),
    strand("ra", r, a),
  ],
  root: "r",
  clicked: { strand: "ab", point: 5 },
  lengthMm: 0,
};
const ids = (part: FollowProposal) => part.strands.map(({ id }) => id).sort();
const kinds = (part: FollowProposal) => Object.fromEntries(part.nodes.map(({ id, kind }) => [id, kind]));

describe("the part of a proposal that is taken", () => {
  it("is the whole when nothing is left out, with its length", () => {
    const part = partOfProposal(tree, new Set());
    expect(ids(part)).toEqual(["a3", "ab", "b1", "b2", "ra"]);
    expect(part.nodes).toEqual(tree.nodes);
    expect(part.root).toBe("r");
    // By hand: 10 + sqrt 50 + 5 + sqrt 50 + sqrt 125.
    expect(part.lengthMm).toBeCloseTo(15 + 2 * Math.sqrt(50) + Math.sqrt(125), 9);
  });

  it("loses what hangs on a strand that is left out, and a fork with two strands left is a waypoint", () => {
    expect([...keptStrands(tree, new Set(["b1"]))].sort()).toEqual(["a3", "ab", "b2", "ra"]);
    const part = partOfProposal(tree, new Set(["b1"]));
    expect(kinds(part)).toEqual({ r: "origin", a: "fork", b: "waypoint", 2: "insertion", 3: "insertion" });
  });

  it("is open where everything beyond was left out, and begins unseen where the origin was", () => {
    const part = partOfProposal(tree, new Set(["b1", "b2", "ra"]));
    expect(ids(part)).toEqual(["a3", "ab"]);
    expect(kinds(part)).toEqual({ a: "origin", b: "open", 3: "insertion" });
    expect(part.root).toBe("a");
    expect(part.nodes.find(({ id }) => id === "a")!.site).toBe("unseen");
  });

  it("ends open at a cut, on the side of the click, with the pins of that side, to be solved from them", () => {
    const part = partOfProposal(tree, new Set(), { strand: "b1", point: 5 });
    expect(ids(part)).toEqual(["a3", "ab", "b1", "b2", "ra"]);
    const cut = part.strands.find(({ id }) => id === "b1")!;
    expect([cut.from, cut.to, cut.points]).toEqual(["b", "cut", []]);
    expect(cut.via).toEqual([pointMm(5, 16, 0)]);
    expect(part.nodes.find(({ id }) => id === "cut")).toMatchObject({ kind: "open", position: [5, 17.5, 0] });
    expect(part.nodes.some(({ id }) => id === "1")).toBe(false);
  });

  it("begins at the cut when the cut lies between click and origin, and cuts the clicked strand on either side", () => {
    const below = partOfProposal(tree, new Set(), { strand: "ra", point: 4 });
    expect(kinds(below)).toMatchObject({ cut: "origin", a: "fork" });
    expect(below.root).toBe("cut");
    const beyond = partOfProposal(tree, new Set(), { strand: "ab", point: 8 });
    expect(ids(beyond)).toEqual(["a3", "ab", "ra"]);
    expect(kinds(beyond).cut).toBe("open");
    const before = partOfProposal(tree, new Set(), { strand: "ab", point: 2 });
    expect(ids(before)).toEqual(["ab", "b1", "b2"]);
    expect(before.root).toBe("cut");
  });

  it("leaves no strand hanging in the air and names no node twice, whatever is left out", () => {
    const all = tree.strands.map(({ id }) => id).filter((id) => id !== "ab");
    for (let mask = 0; mask < 2 ** all.length; mask++) {
      const leftOut = new Set(all.filter((_, i) => mask & (1 << i)));
      for (const cut of [null, { strand: "a3", point: 3 }, { strand: "ab", point: 7 }]) {
        const part = partOfProposal(tree, leftOut, cut);
        const nodes = new Set(part.nodes.map(({ id }) => id));
        expect(nodes.size).toBe(part.nodes.length);
        // A tree has one node more than strands, and its origin is one of them.
        expect(nodes.size).toBe(part.strands.length + 1);
        expect(part.strands.every(({ from, to }) => nodes.has(from) && nodes.has(to))).toBe(true);
        expect(part.nodes.filter(({ kind }) => kind === "origin").map(({ id }) => id)).toEqual([part.root]);
      }
    }
  });
});
