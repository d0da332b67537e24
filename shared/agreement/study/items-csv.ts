import { meanRadius } from "#shared/agreement/study/quantities.ts";
import {
  itemsAt,
  type SpecimenItems,
  type Study,
  type StudyFile,
  type StudyPass,
  studyOf,
} from "#shared/agreement/study/study.ts";
import { writeCsv } from "#shared/formats/tables/csv.ts";

const HEADER = [
  ...["specimen", "kind", "item", "annotator", "pass", "marked", "id", "length_mm", "x_mm", "y_mm", "z_mm"],
  ...["type", "path_length_mm", "mean_radius_mm", "leaflet", "segment", "zone"],
];
/** Columns that an item has only where the pass marked it. */
const OF_MARKED = HEADER.length - 6;

/**
 * The item table of tree files in long form: a row for each item and pass, also where the pass has none of it.
 * @param tolerance, merge millimetres, as for the agreement itself.
 */
export function itemsCsv(files: readonly StudyFile[], tolerance: number, merge: number, method: string | null): string {
  return itemsCsvOf(studyOf(files, merge, method), tolerance, merge);
}

/** The item table of a study. @param tolerance, merge millimetres. */
export function itemsCsvOf(study: Study, tolerance: number, merge: number): string {
  const items = study.specimens.map((specimen) => itemsAt(specimen, tolerance, merge));
  return writeCsv([HEADER, ...longRows(study, items)]);
}

type Cell = string | number | null;

function longRows({ specimens }: Study, items: readonly SpecimenItems[]): Cell[][] {
  return specimens.flatMap(({ name, passes }, s) => {
    const rows = (kind: "strand" | "node", table: SpecimenItems["strands"]) => {
      const cells = passes.map((pass) => (kind === "strand" ? strandCells(pass) : nodeCells(pass)));
      return table.items.flatMap(({ members }, k) =>
        passes.map(({ annotator, pass }, p): Cell[] => {
          const own = members[p]! < 0 ? null : cells[p]!(members[p]!);
          return [name, kind, k + 1, annotator, pass, own ? 1 : 0, ...(own ?? Array.from({ length: OF_MARKED }, () => null))];
        }),
      );
    };
    return [...rows("strand", items[s]!.strands), ...rows("node", items[s]!.nodes)];
  });
}

function strandCells(pass: StudyPass): (strand: number) => Cell[] {
  return (k) => {
    const { id, length } = pass.canonical.strands[k]!;
    return [id, length, null, null, null, null, null, meanRadius(pass, [k]), null, null, null];
  };
}

function nodeCells({ canonical, measures, file }: StudyPass): (node: number) => Cell[] {
  const paths = new Map(measures.nodes.map(({ id, pathLength }) => [id, pathLength]));
  const labels = new Map(file.trees.flatMap(({ nodes }) => nodes.map((node) => [node.id, node])));
  return (k) => {
    const { id, place, type } = canonical.nodes[k]!;
    const { leaflet, segment, zone } = labels.get(id) ?? {};
    return [id, null, ...place, type, paths.get(id) ?? null, null, leaflet ?? null, segment ?? null, zone ?? null];
  };
}
