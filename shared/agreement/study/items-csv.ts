import { itemsAt, type SpecimenItems, type Study, type StudyFile, studyOf } from "#shared/agreement/study/study.ts";
import { writeCsv } from "#shared/formats/tables/csv.ts";

const HEADER = ["specimen", "kind", "item", "annotator", "pass", "marked", "id", "length_mm", "x_mm", "y_mm", "z_mm"];

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

function longRows({ specimens }: Study, items: readonly SpecimenItems[]): (string | number | null)[][] {
  return specimens.flatMap(({ name, passes }, s) => {
    const rows = (kind: "strand" | "node", table: SpecimenItems["strands"]) =>
      table.items.flatMap(({ members }, k) =>
        passes.map(({ annotator, pass, canonical }, p) => {
          const start = [name, kind, k + 1, annotator, pass];
          if (members[p]! < 0) return [...start, 0, null, null, null, null, null];
          if (kind === "strand") {
            const strand = canonical.strands[members[p]!]!;
            return [...start, 1, strand.id, strand.length, null, null, null];
          }
          const node = canonical.nodes[members[p]!]!;
          return [...start, 1, node.id, null, ...node.place];
        }),
      );
    return [...rows("strand", items[s]!.strands), ...rows("node", items[s]!.nodes)];
  });
}
