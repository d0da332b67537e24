import { readFile, stat } from "node:fs/promises";
import { join } from "node:path";
import { LARGEST_TREE_FILE, readTreeFile } from "#main/cli/read-tree-file.ts";
import { unreadable } from "#shared/errors.ts";
import { readGraphml } from "#shared/formats/graphml/read-graphml.ts";
import type { ReadTwin } from "#shared/formats/read-twin.ts";
import { readTables } from "#shared/formats/tables/read-tables.ts";
import { readVtp } from "#shared/formats/vtp/read-vtp.ts";

const READABLE = "a tree file (.chordae.json), GraphML (.graphml), PolyData (.vtp) or a folder of tables";

/**
 * The trees at a path, by its ending: a tree file, GraphML, VTK PolyData, or a folder with nodes.csv and strands.csv.
 * @throws unreadable-input
 */
export async function readTrees(path: string): Promise<ReadTwin> {
  const found = await stat(path).catch(() => undefined);
  if (!found) throw unreadable(path, READABLE, "nothing there", undefined, "Check the name.");
  if (found.isDirectory()) {
    const table = (name: string) => readText(join(path, name)).catch(() => undefined);
    const [nodes, strands] = [await table("nodes.csv"), await table("strands.csv")];
    if (nodes === undefined || strands === undefined) {
      const missing = nodes === undefined ? "nodes.csv" : "strands.csv";
      throw unreadable(path, "a folder with nodes.csv and strands.csv", `no ${missing} that can be read`);
    }
    return readTables({ nodes, strands, trees: await table("trees.csv"), columns: await table("columns.csv") }, path);
  }
  if (/\.graphml$/i.test(path)) return readGraphml(await readText(path), path);
  if (/\.vtp$/i.test(path)) {
    refuseLarge(path, found.size);
    return readVtp(await readFile(path), path);
  }
  if (/\.json$/i.test(path)) return { file: await readTreeFile(path), notes: [] };
  throw unreadable(path, READABLE, "another ending", undefined, "Give the file the ending of its format.");
}

async function readText(path: string): Promise<string> {
  refuseLarge(path, (await stat(path)).size);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(await readFile(path));
  } catch (error) {
    if (error instanceof TypeError) throw unreadable(path, "text in UTF-8", "bytes that are not UTF-8");
    throw error;
  }
}

function refuseLarge(path: string, bytes: number): void {
  if (bytes > LARGEST_TREE_FILE) throw unreadable(path, `at most ${LARGEST_TREE_FILE} bytes`, `${bytes} bytes`);
}
