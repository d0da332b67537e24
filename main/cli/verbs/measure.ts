import { readTreeFile } from "#main/cli/read-tree-file.ts";
import type { Verb } from "#main/cli/verb.ts";
import { measureTrees } from "#shared/measure/measure-trees.ts";

/** `tautline measure`: lengths, radii and angles of every strand, node and tree. */
export const measure: Verb = {
  name: "measure",
  summary: "lengths, path lengths, radii, areas, angles and branch orders of a tree file",
  help: `tautline measure T [--json]

Measures every strand, node and tree of a tree file: millimetres, square millimetres, degrees. What cannot be given is
left empty (null under --json), never a zero. The table shows trees; --json holds strands and nodes too.`,
  options: {},
  positionals: [1, 1],
  async run({ positionals }) {
    const found = measureTrees(await readTreeFile(positionals[0]!));
    const rows = found.trees.map((tree) => [
      tree.name || tree.id,
      tree.length.toFixed(2),
      `${tree.strands}`,
      `${tree.forks}`,
      `${tree.ends}`,
    ]);
    const { totals } = found;
    const all = [
      ["tree", "length mm", "strands", "forks", "ends"],
      ...rows,
      [`${totals.trees} trees`, totals.length.toFixed(2), `${totals.strands}`, `${totals.forks}`, `${totals.ends}`],
    ];
    const widths = all[0]!.map((_, column) => Math.max(...all.map((row) => row[column]!.length)));
    const text = all
      .map((row) =>
        row.map((cell, column) => (column === 0 ? cell.padEnd(widths[0]!) : cell.padStart(widths[column]!))).join("  "),
      )
      .join("\n");
    return { json: found, text, exit: 0 };
  },
};
