import type { PlainTree } from "#shared/trees/plain-trees.ts";

/** A tree from text like "r-b b-1 b-2": r is the origin, letters are forks, digits ends. Places spread out so that geometry differs. */
export function treeOf(text: string, id = "t1"): PlainTree {
  const strands = text
    .split(" ")
    .filter(Boolean)
    .map((pair, k) => {
      const [from, to] = pair.split("-") as [string, string];
      return { id: `s${k + 1}`, from, to };
    });
  const names = [...new Set(strands.flatMap((strand) => [strand.from, strand.to]))];
  const nodes = names.map((name, k) => ({
    id: name,
    kind: name === "r" ? "origin" : /\d/.test(name) ? "insertion" : "fork",
    position: [k * 3, (k * k) % 7, k % 2],
  }));
  return { id, root: names.includes("r") ? "r" : null, nodes, strands };
}

/** Numbers in [0, 1) from a seed (mulberry32, public domain algorithm; from memory). */
export function seededRandom(seed: number): () => number {
  let s = seed >>> 0;
  return () => {
    s = (s + 0x6d2b79f5) >>> 0;
    let t = Math.imul(s ^ (s >>> 15), 1 | s);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** A random chordae-shaped tree: an origin, forks of two or three branches, ends; `size` nodes. */
export function randomTree(random: () => number, size: number, id = "t1"): PlainTree {
  const nodes: { id: string; kind: string; position: number[] }[] = [{ id: "n0", kind: "origin", position: [0, 0, 0] }];
  const strands: { id: string; from: string; to: string }[] = [];
  const degree = [0];
  while (nodes.length < size) {
    const open = nodes.map((_, i) => i).filter((i) => degree[i]! < (i === 0 ? 1 : 4));
    const at = open[Math.floor(random() * open.length)]!;
    const parent = nodes[at]!;
    const k = nodes.length;
    nodes.push({
      id: `n${k}`,
      kind: "insertion",
      position: [
        parent.position[0]! + (random() - 0.5) * 6,
        parent.position[1]! + (random() - 0.5) * 6,
        parent.position[2]! + 2 + random() * 3,
      ],
    });
    strands.push({ id: `s${k}`, from: parent.id, to: `n${k}` });
    degree[at]! += 1;
    degree.push(1);
    if (at > 0) parent.kind = "fork";
  }
  return { id, root: "n0", nodes, strands };
}
