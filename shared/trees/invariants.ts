import type { CrossLink, Strand, TreeDocument } from "#shared/trees/document.ts";

/**
 * Sentences on what is broken in a document as a data structure; empty for a sound one. Anatomical or structural faults that
 * a file may carry (no root, loops, pieces apart) are findings, not breaks. Complexity: size of the document.
 */
export function brokenInvariants(document: TreeDocument): string[] {
  const broken: string[] = [];
  for (const [id, tree] of document.trees) {
    if (tree.id !== id) broken.push(`tree ${id} calls itself ${tree.id}`);
    if (tree.root !== null && document.nodes.get(tree.root)?.tree !== id)
      broken.push(`tree ${id}: its root ${tree.root} is no node of it`);
  }
  for (const [id, node] of document.nodes) {
    if (node.id !== id) broken.push(`node ${id} calls itself ${node.id}`);
    if (!document.trees.has(node.tree)) broken.push(`node ${id}: its tree ${node.tree} is not there`);
    if (!node.position.every(Number.isFinite)) broken.push(`node ${id}: its position is not finite`);
  }
  for (const [id, strand] of document.strands) {
    if (!document.trees.has(strand.tree)) broken.push(`strand ${id}: its tree ${strand.tree} is not there`);
    for (const end of [strand.from, strand.to]) {
      const node = document.nodes.get(end);
      if (node && node.tree !== strand.tree) broken.push(`strand ${id} of ${strand.tree} ends at ${end} of ${node.tree}`);
    }
    if (strand.legs && strand.legs.length !== strand.via.length + 1) broken.push(`strand ${id}: legs and pins do not fit`);
    broken.push(...lineBreaks(document, `strand ${id}`, id, strand));
  }
  for (const [id, link] of document.crossLinks) broken.push(...lineBreaks(document, `cross-link ${id}`, id, link));
  for (const [key, dismissal] of document.dismissals)
    if (dismissal.key !== key) broken.push(`dismissal ${key} calls itself ${dismissal.key}`);
  return broken;
}

function lineBreaks(document: TreeDocument, name: string, id: string, line: Strand | CrossLink): string[] {
  const broken: string[] = [];
  if (line.id !== id) broken.push(`${name} calls itself ${line.id}`);
  const from = document.nodes.get(line.from);
  const to = document.nodes.get(line.to);
  if (!from) broken.push(`${name}: its node ${line.from} is not there`);
  if (!to) broken.push(`${name}: its node ${line.to} is not there`);
  if (!line.via.flat().every(Number.isFinite)) broken.push(`${name}: a pin is not finite`);
  if (line.curve === null) return broken;
  const curve = document.curves.get(line.curve);
  if (!curve) return [...broken, `${name}: its curve ${line.curve} is not there`];
  const n = curve.radii.length;
  if (n < 2 || curve.points.length !== 3 * n) return [...broken, `${name}: points and radii of ${line.curve} do not fit`];
  const ends = [
    [from, 0],
    [to, 3 * (n - 1)],
  ] as const;
  for (const [node, offset] of ends) {
    if (node && !node.position.every((value, axis) => value === curve.points[offset + axis])) {
      broken.push(`${name}: its curve ${line.curve} does not end at ${node.id}`);
    }
  }
  return broken;
}
