import { DEFAULT_SEVERITY, type Finding, type StructureCode } from "#shared/checks/finding.ts";
import { sharedStretches } from "#shared/checks/shared-stretches.ts";
import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { type PlainNode, type PlainSet, type PlainTree, placeOf } from "#shared/trees/plain-trees.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/**
 * Findings on the structure of trees, tree by tree, then stretches that strands share. An empty list means that every tree
 * has a root, hangs together, is free of loops and unfinished ends, and repeats no string.
 */
export function structureFindings(set: PlainSet): Finding[] {
  const names = new Map(set.trees.map((tree) => [tree.id, tree.name ? tree.name : tree.id]));
  return [...set.trees.flatMap(findingsOfTree), ...doubled(set, names)];
}

function findingsOfTree(tree: PlainTree): Finding[] {
  const name = tree.name ? tree.name : tree.id;
  const byId = new Map(tree.nodes.map((node) => [node.id, node]));
  const rooted = rootedStrands(tree);
  const findings: Finding[] = [];
  const report = (code: StructureCode, message: string, node: PlainNode | undefined, strand: string | null, position?: Vec3) =>
    findings.push({
      code,
      severity: DEFAULT_SEVERITY[code],
      tree: tree.id,
      at: { position: position ?? (node ? placeOf(node) : null), node: node?.id ?? null, strand },
      message,
    });
  const root = tree.root === null ? undefined : byId.get(tree.root);
  if (!root) report("no-root", `${name} has no origin. Say which node it grows from.`, tree.nodes[0], null);
  const pieces = piecesOf(tree, rooted, root?.id);
  for (const piece of pieces.slice(1)) {
    const what = piece.length === 1 ? "one node is" : `${piece.length} nodes are`;
    report(
      "not-connected",
      `${name}: ${what} not connected with the rest. Join the piece or move it to another tree.`,
      byId.get(piece[0]!),
      null,
    );
  }
  const arrived = new Set(root ? [root.id] : []);
  for (const strand of rooted) {
    const closes = arrived.has(strand.to) || strand.to === strand.from;
    if (closes)
      report(
        "loop",
        `${name}: strand ${strand.strand.id} closes a loop. A tree has none; make it a cross-link or cut it.`,
        byId.get(strand.to),
        strand.strand.id,
      );
    arrived.add(strand.from);
    arrived.add(strand.to);
  }
  for (const node of tree.nodes)
    if (node.kind === "open")
      report("open-end", `${name}: the end at node ${node.id} is unfinished. Carry it on or say how it ends.`, node, null);
  for (const strand of tree.strands) {
    if (!strand.points || strand.points.length < 2)
      report("no-points", `${name}: strand ${strand.id} has no centreline yet.`, byId.get(strand.from), strand.id);
  }
  for (const node of tree.nodes) {
    const meets = tree.strands.reduce(
      (sum, strand) => sum + (strand.from === node.id ? 1 : 0) + (strand.to === node.id ? 1 : 0),
      0,
    );
    if (node.kind === "fork" && meets === 2) {
      report(
        "two-strand-fork",
        `${name}: only two strands meet at fork ${node.id}. Dissolve it or trace the missing branch.`,
        node,
        null,
      );
    }
  }
  for (const spur of shortSpurs(tree, rooted)) {
    const end = byId.get(spur.strand.to);
    report(
      "short-spur",
      `${name}: strand ${spur.strand.strand.id} is ${spur.length.toFixed(2)} mm long, shorter than the radius (${spur.radius.toFixed(2)} mm) of the strand it leaves.`,
      end,
      spur.strand.strand.id,
    );
  }
  return findings;
}

/** Node ids of each connected piece, the root's first, else the largest. */
function piecesOf(tree: PlainTree, rooted: readonly RootedStrand[], root: string | undefined): string[][] {
  const group = new Map(tree.nodes.map((node) => [node.id, node.id]));
  const find = (id: string): string => (group.get(id) === id ? id : find(group.get(id)!));
  for (const { strand } of rooted)
    if (group.has(strand.from) && group.has(strand.to)) group.set(find(strand.to), find(strand.from));
  const pieces = new Map<string, string[]>();
  for (const node of tree.nodes) pieces.set(find(node.id), [...(pieces.get(find(node.id)) ?? []), node.id]);
  const isMain = (piece: string[]) => (root !== undefined && piece.includes(root) ? 1 : 0);
  return [...pieces.values()].sort((x, y) => isMain(y) - isMain(x) || y.length - x.length);
}

/** End strands shorter than the radius, at the fork, of the strand they leave. */
function shortSpurs(
  tree: PlainTree,
  rooted: readonly RootedStrand[],
): { strand: RootedStrand; length: number; radius: number }[] {
  const goesOn = new Set(rooted.map((strand) => strand.before));
  return rooted.flatMap((strand, k) => {
    if (goesOn.has(k) || strand.before < 0 || strand.from === tree.root) return [];
    const radius = [...rooted[strand.before]!.radii].reverse().find((r) => r !== null);
    const length = polylineLength(strand.line);
    return radius !== undefined && radius !== null && length < radius ? [{ strand, length, radius }] : [];
  });
}

function doubled(set: PlainSet, names: ReadonlyMap<string, string>): Finding[] {
  return sharedStretches(set).map((stretch): Finding => {
    const code: StructureCode = stretch.treeA === stretch.treeB ? "overlapping-strands" : "shared-stretch";
    const length = `${stretch.length.toFixed(1)} mm`;
    const message =
      code === "overlapping-strands"
        ? `${names.get(stretch.treeA)}: strands ${stretch.strandA} and ${stretch.strandB} run along the same string for ${length}. Delete one of them.`
        : `${names.get(stretch.treeA)} (strand ${stretch.strandA}) and ${names.get(stretch.treeB)} (strand ${stretch.strandB}) share ${length} of string. One of them follows a neighbour.`;
    return {
      code,
      severity: DEFAULT_SEVERITY[code],
      tree: stretch.treeA,
      at: { position: stretch.at, node: null, strand: stretch.strandA },
      message,
    };
  });
}
