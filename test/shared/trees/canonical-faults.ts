import type { TreeDocument } from "#shared/trees/document.ts";
import { requestOf } from "#shared/trees/edits/edit-draft.ts";
import { drawnCurve } from "./drawn-curve.ts";

/**
 * What an edit left wrong, by rules written without the program's own walks: trees are forests (union-find), a tree with a
 * root hangs together, kinds fit degrees, and every curve is what the tracer would draw from the pins as they now are.
 */
export function canonicalFaults(document: TreeDocument): string[] {
  const faults: string[] = [];
  const parent = new Map<string, string>([...document.nodes.keys()].map((id) => [id, id]));
  const find = (id: string): string => (parent.get(id) === id ? id : find(parent.get(id)!));
  const degree = new Map<string, number>();
  for (const strand of document.strands.values()) {
    const [a, b] = [find(strand.from), find(strand.to)];
    if (a === b) faults.push(`${strand.id} closes a loop`);
    parent.set(a, b);
    for (const end of [strand.from, strand.to]) degree.set(end, (degree.get(end) ?? 0) + 1);
    if (strand.curve === null) faults.push(`${strand.id} was left unsolved`);
    const curve = strand.curve === null ? undefined : document.curves.get(strand.curve);
    const expected = drawnCurve(requestOf(document, strand)).points;
    if (curve && JSON.stringify([...curve.points]) !== JSON.stringify([...expected]))
      faults.push(`${strand.id} was not solved again`);
  }
  for (const link of document.crossLinks.values()) {
    const curve = document.crossLinks.get(link.id)!.curve;
    const expected = drawnCurve(requestOf(document, link)).points;
    const points = curve === null ? [] : [...document.curves.get(curve)!.points];
    if (JSON.stringify(points) !== JSON.stringify([...expected])) faults.push(`${link.id} was not solved again`);
  }
  for (const tree of document.trees.values()) {
    const nodes = [...document.nodes.values()].filter((node) => node.tree === tree.id);
    if (nodes.length === 0) faults.push(`${tree.id} has no node`);
    if (new Set(nodes.map((node) => find(node.id))).size > 1) faults.push(`${tree.id} is in pieces`);
    for (const node of nodes) {
      const strands = degree.get(node.id) ?? 0;
      const isRoot = tree.root === node.id;
      if (isRoot !== (node.kind === "origin")) faults.push(`${node.id} is ${node.kind} but ${isRoot ? "" : "not "}the root`);
      if (node.kind === "fork" && strands < 2) faults.push(`${node.id} is a fork of ${strands}`);
      if (node.kind === "waypoint" && strands !== 2) faults.push(`${node.id} is a waypoint of ${strands}`);
      if (!isRoot && node.kind !== "fork" && node.kind !== "waypoint" && strands !== 1)
        faults.push(`${node.id}, ${node.kind}, ends ${strands}`);
    }
  }
  const names = [...document.trees.values()].map((tree) => tree.name);
  if (new Set(names).size < names.length) faults.push("two trees share a name");
  return faults;
}
