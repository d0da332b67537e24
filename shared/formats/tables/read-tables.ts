import { unreadable } from "#shared/errors.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { CHORDAE_FORMAT, CHORDAE_VERSION } from "#shared/formats/chordae/chordae-file.ts";
import { present } from "#shared/formats/chordae/known-keys.ts";
import type { ReadTwin } from "#shared/formats/read-twin.ts";
import { readCsv } from "#shared/formats/tables/csv.ts";

type Cells = Record<string, string>;

/**
 * The trees in tables as this program writes them; `trees` and `columns` may be missing. Strands come back without
 * centrelines: the tables do not hold them.
 * @param tables texts of nodes.csv, strands.csv and, where they are, trees.csv and columns.csv. @param folder for messages.
 * @throws unreadable-input for missing columns, cells that are no numbers, or rows that do not make a valid tree file.
 */
export function readTables(
  tables: {
    readonly nodes: string;
    readonly strands: string;
    readonly trees?: string | undefined;
    readonly columns?: string | undefined;
  },
  folder: string,
): ReadTwin {
  const nodes = rowsOf(tables.nodes, `${folder}/nodes.csv`, ["id", "kind", "x_mm", "y_mm", "z_mm"]);
  const strands = rowsOf(tables.strands, `${folder}/strands.csv`, ["id", "from", "to"]);
  const trees = tables.trees === undefined ? [] : rowsOf(tables.trees, `${folder}/trees.csv`, ["id"]);
  const about = tables.columns === undefined ? [] : readCsv(tables.columns, `${folder}/columns.csv`);
  const frame = /frame (LPS|scan)\b/.exec(about.find((row) => row.column === "frame")?.meaning ?? "")?.[1];
  const ids = [...new Set([...trees.map((row) => row.id!), ...nodes.map((row) => row.tree || "t1")])];
  const names = new Map(trees.map((row) => [row.id, row]));
  const file = {
    ...present({ format: CHORDAE_FORMAT, version: CHORDAE_VERSION, unit: "mm", frame }),
    trees: ids.map((id) => {
      const own = nodes.filter((row) => (row.tree || "t1") === id);
      const origins = own.filter((row) => row.kind === "origin");
      const root = names.get(id)?.root || (origins.length === 1 ? origins[0]!.id : null);
      return present({
        id,
        name: names.get(id)?.name || own.find((row) => row.tree_name)?.tree_name,
        root,
        nodes: own.map((row) => nodeOf(row, `${folder}/nodes.csv`)),
        strands: strands.filter((row) => row.kind !== "cross-link" && (row.tree || "t1") === id).map(strandOf),
      });
    }),
    ...present({ crossLinks: linksOf(strands) }),
  };
  const notes = strands.length === 0 ? [] : ["Tables hold no centrelines: the strands came back without points."];
  if (frame === undefined) notes.push("The tables name no frame; places are taken to be in the scan's own.");
  return { file: checkChordaeFile(file, folder), notes };
}

function rowsOf(text: string, fileName: string, needed: readonly string[]): Cells[] {
  const rows = readCsv(text, fileName);
  const header = new Set(Object.keys(rows[0] ?? {}));
  const missing = rows.length === 0 ? undefined : needed.find((name) => !header.has(name));
  if (missing !== undefined) throw unreadable(fileName, `a column ${missing}`, [...header].join(", ").slice(0, 120));
  return rows;
}

function nodeOf(row: Cells, fileName: string): Record<string, unknown> {
  const number = (column: string) => {
    const value = row[column]!.trim() === "" ? Number.NaN : Number(row[column]);
    if (!Number.isFinite(value)) throw unreadable(fileName, "a number", `'${row[column]}'`, `node ${row.id}, ${column}`);
    return value;
  };
  const { id, kind, site, muscle, certainty, leaflet, segment, zone, cleft } = row;
  return present({
    id,
    kind,
    site: site || undefined,
    muscle: muscle || undefined,
    head: row.head ? number("head") : undefined,
    position: [number("x_mm"), number("y_mm"), number("z_mm")],
    certainty: certainty || undefined,
    leaflet: leaflet || undefined,
    segment: segment || undefined,
    zone: zone || undefined,
    cleft: cleft ? cleft === "true" : undefined,
  });
}

function strandOf({ id, from, to, strut, certainty }: Cells): Record<string, unknown> {
  return present({ id, from, to, strut: strut ? strut === "true" : undefined, certainty: certainty || undefined });
}

function linksOf(rows: readonly Cells[]): Record<string, unknown>[] | undefined {
  const links = rows.filter((row) => row.kind === "cross-link");
  return links.length === 0
    ? undefined
    : links.map(({ id, from, to, certainty }) => present({ id, from, to, certainty: certainty || undefined }));
}
