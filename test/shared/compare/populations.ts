import type { PlainNode, PlainStrand, PlainTree } from "#shared/trees/plain-trees.ts";
import { randomTree } from "#test/shared/compare/small-trees.ts";

type Random = () => number;
const pick = <T>(random: Random, list: readonly T[]): T => list[Math.floor(random() * list.length)]!;

/**
 * The tree as another annotator might have drawn it: every place off by up to 0.1 mm, and 2-6 human errors, each a missed
 * branch, a strand ended short, a fork 0.6 mm low, or two tails exchanged.
 */
export function nearTree(tree: PlainTree, random: Random): PlainTree {
  let nodes: { -readonly [K in keyof PlainNode]: PlainNode[K] }[] = tree.nodes.map((node) => ({
    ...node,
    position: node.position.map((x) => x + (random() - 0.5) * 0.2),
  }));
  let strands: { -readonly [K in keyof PlainStrand]: PlainStrand[K] }[] = tree.strands.map((strand) => ({ ...strand }));
  const errors = 2 + Math.floor(random() * 5);
  for (let k = 0; k < errors; k++) {
    const ends = nodes.filter((node) => node.kind === "insertion");
    const forks = nodes.filter((node) => node.kind === "fork");
    const kind = Math.floor(random() * 4);
    if (kind === 0 && ends.length > 2) {
      const end = pick(random, ends);
      nodes = nodes.filter((node) => node !== end);
      strands = strands.filter((strand) => strand.to !== end.id);
    } else if (kind === 1) {
      const end = pick(random, ends);
      const start = nodes.find((node) => node.id === strands.find((strand) => strand.to === end.id)!.from)!;
      end.position = end.position.map((x, axis) => x + (start.position[axis]! - x) * 0.4);
    } else if (kind === 2 && forks.length > 0) {
      const fork = pick(random, forks);
      fork.position = [fork.position[0]!, fork.position[1]!, fork.position[2]! - 0.6];
    } else if (ends.length > 1) {
      const [a, b] = [pick(random, ends), pick(random, ends)];
      const [p, q] = [strands.find((strand) => strand.to === a.id)!, strands.find((strand) => strand.to === b.id)!];
      [p.to, q.to] = [q.to, p.to];
    }
  }
  return { ...tree, nodes, strands };
}

/** A fixed population of pairs of `size` nodes: the same seed gives the same pairs. */
export function population(kind: "near" | "unrelated", size: number, count: number, random: Random): [PlainTree, PlainTree][] {
  return Array.from({ length: count }, () => {
    const a = randomTree(random, size);
    return [a, kind === "near" ? nearTree(a, random) : randomTree(random, size)];
  });
}
