import { type ChordaeFile, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { holdingsOf, sentences } from "#shared/formats/losses.ts";
import { COLUMNS, type TableName } from "#shared/formats/tables/columns.ts";
import { writeCsv } from "#shared/formats/tables/csv.ts";
import { roundMm } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { measureTrees } from "#shared/measure/measure-trees.ts";
import { radiusStatistics } from "#shared/measure/radius-statistics.ts";
import { centreline, strandLength } from "#shared/trees/plain-trees.ts";

type Row = Readonly<Record<string, string | number | boolean | null | undefined>>;

/**
 * The trees of a file as tables: `nodes.csv`, `strands.csv`, `trees.csv` with measures, and `columns.csv`, which says what each
 * column means and in which frame places are. Lengths are rounded to 1e-6 mm; an empty cell means that there is no value.
 */
export function writeTables(file: ChordaeFile): { readonly name: string; readonly text: string }[] {
  const measured = measureTrees(file);
  const strandMeasures = new Map(measured.strands.map((strand) => [strand.id, strand]));
  const nodeMeasures = new Map(measured.nodes.map((node) => [node.id, node]));
  const treeMeasures = new Map(measured.trees.map((tree) => [tree.id, tree]));
  const places = new Map(file.trees.flatMap((tree) => tree.nodes.map((node) => [node.id, node] as const)));
  const nodes = file.trees.flatMap((tree) =>
    tree.nodes.map((node): Row => {
      const found = nodeMeasures.get(node.id);
      const [x_mm, y_mm, z_mm] = node.position.map(roundMm);
      const { kind, certainty, site, muscle, head, leaflet, segment, zone, cleft } = node;
      return {
        ...{ id: node.id, tree: tree.id, tree_name: tree.name, kind, x_mm, y_mm, z_mm },
        ...{ certainty, site, muscle, head, leaflet, segment, zone, cleft },
        path_length_mm: rounded(found?.pathLength),
        straight_length_mm: rounded(found?.straightLength),
        straightness_angle_deg: rounded(found?.straightnessAngle),
        branching_angle_deg: rounded(found?.branchingAngle),
      };
    }),
  );
  const strands = file.trees.flatMap((tree) =>
    tree.strands.map((strand): Row => {
      const found = strandMeasures.get(strand.id);
      const { id, from, to, strut, certainty } = strand;
      return {
        ...{ id, tree: tree.id, tree_name: tree.name, kind: "strand", from, to, strut, certainty },
        traced: strand.points !== undefined,
        length_mm: rounded(found?.length),
        straight_length_mm: rounded(found?.straightLength),
        slack: rounded(found?.slack),
        ...radiusCells(found),
        order: found?.order,
        trunk: found?.trunk,
        image_fit: strand.imageFit,
      };
    }),
  );
  for (const link of file.crossLinks ?? []) {
    const [from, to] = [places.get(link.from)!, places.get(link.to)!];
    const length = strandLength(link, from, to);
    const straight = distance(from.position, to.position);
    strands.push({
      ...{ id: link.id, kind: "cross-link", from: link.from, to: link.to, certainty: link.certainty },
      traced: link.points !== undefined,
      length_mm: rounded(length),
      straight_length_mm: rounded(straight),
      slack: straight > 0 ? rounded(length / straight - 1) : null,
      ...radiusCells(radiusStatistics(centreline(link, from, to), link.radii)),
      image_fit: link.imageFit,
    });
  }
  const trees = file.trees.map((tree): Row => {
    const found = treeMeasures.get(tree.id);
    return {
      id: tree.id,
      name: tree.name,
      root: tree.root,
      length_mm: rounded(found?.length),
      strands: found?.strands,
      forks: found?.forks,
      ends: found?.ends,
    };
  });
  return [table("nodes", nodes), table("strands", strands), table("trees", trees), dictionary(file)];
}

/** What the tables do not keep of this file, one sentence each. */
export function tablesLosses(file: ChordaeFile): string[] {
  const has = holdingsOf(file);
  return sentences([
    [!has.untraced || file.trees.length > 0, "Centrelines and the radius at each point are not kept, only measures of them."],
    [has.pins || has.provenance, "Pins and the way strands were made are not kept."],
    [has.scan || has.specimen || has.protocol, "Scan, specimen and protocol are not kept; the frame is named in columns.csv."],
    [has.landmarks, "Landmarks are not kept."],
    [has.unknown, "Keys of the tree file that this program does not know are not kept."],
  ]);
}

function table(name: TableName, rows: readonly Row[]): { name: string; text: string } {
  const names = COLUMNS[name].map((column) => column.name);
  return { name: `${name}.csv`, text: writeCsv([names, ...rows.map((row) => names.map((column) => row[column]))]) };
}

function dictionary(file: ChordaeFile): { name: string; text: string } {
  const frame = frameOf(file);
  const meaning =
    frame === "LPS" ? "LPS: x to the left, y to the back, z up; millimetres." : "scan: the scan's own axes; millimetres.";
  const rows = Object.entries(COLUMNS).flatMap(([name, columns]) =>
    columns.map((column) => [`${name}.csv`, column.name, column.unit, column.meaning]),
  );
  const about = [
    ["", "frame", "", `Places are in frame ${meaning}`],
    ["", "use", "", "Research use only; not a medical device."],
  ];
  return { name: "columns.csv", text: writeCsv([["table", "column", "unit", "meaning"], ...rows, ...about]) };
}

function radiusCells(found: ReturnType<typeof radiusStatistics> | undefined): Row {
  return {
    mean_radius_mm: rounded(found?.meanRadius),
    min_radius_mm: rounded(found?.minRadius),
    max_radius_mm: rounded(found?.maxRadius),
    mean_area_mm2: rounded(found?.meanArea),
  };
}

function rounded(value: number | null | undefined): number | null {
  return value === null || value === undefined ? null : roundMm(value);
}
