// A whole valve against another annotator's pass over it: 40 trees a side, some 350 nodes.
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { PlainTree } from "#shared/trees/plain-trees.ts";
import { nearTree } from "#test/shared/compare/populations.ts";
import { randomTree, seededRandom } from "#test/shared/compare/small-trees.ts";

function valve(random: () => number): PlainTree[] {
  return Array.from({ length: 40 }, (_, k) => {
    const tree = randomTree(random, 6 + Math.floor(random() * 7), `t${k}`);
    const shift = [12 * (k % 7), 12 * Math.floor(k / 7), 0];
    const name = (id: string) => `t${k}${id}`;
    return {
      ...tree,
      root: name(tree.root!),
      nodes: tree.nodes.map((node) => ({
        ...node,
        id: name(node.id),
        position: node.position.map((x, axis) => x + shift[axis]!),
      })),
      strands: tree.strands.map((strand) => ({ ...strand, id: name(strand.id), from: name(strand.from), to: name(strand.to) })),
    };
  });
}

/** Time of the whole comparison, with a checksum of its distance. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const random = seededRandom(350);
  const a = { trees: valve(random) };
  const b = { trees: a.trees.map((tree) => nearTree(tree, random)) };
  const options = {
    preset: "geometry",
    origin: "held",
    positionScale: 2,
    merge: 0.3,
    tolerance: 0.5,
    minimumDiameter: null,
    step: 0.02,
  } as const;
  const start = cpuMs();
  const began = performance.now();
  const answer = compareSets(a, b, options, () => 60_000 - (performance.now() - began));
  const nodes = a.trees.reduce((sum, tree) => sum + tree.nodes.length, 0);
  print(
    `whole valve: ${a.trees.length} trees, ${nodes} nodes a side: ${((cpuMs() - start) / 1000).toFixed(2)} CPU s, exact ${answer.whole.exact}, checksum ${answer.whole.ged.toFixed(6)}`,
  );
}
