import { type ChordaeFile, type FileLine, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { holdingsOf, sentences } from "#shared/formats/losses.ts";
import { toBase64 } from "#shared/formats/vtp/base64.ts";
import { xmlTag } from "#shared/formats/xml/write-xml.ts";
import { centreline } from "#shared/trees/plain-trees.ts";

/**
 * The trees of a file as VTK XML PolyData: one line per strand, then one per cross-link, each with its own points.
 * PointData `radius` (millimetres, NaN where not measured), CellData `tree` and `strand` (numbers from 1 into the lists of ids)
 * and `crossLink` (0 or 1), FieldData `unit frame treeIds treeNames strandIds`. A strand that is not traced runs straight
 * through its pins. Arrays are inline base64, little-endian, with 64-bit headers. The same file gives the same text.
 * @source VTK XML file formats, version 1.0.
 */
export function writeVtp(file: ChordaeFile): string {
  const nodes = new Map(file.trees.flatMap((tree) => tree.nodes.map((node) => [node.id, node] as const)));
  const lines: { line: FileLine; tree: number; crossLink: 0 | 1 }[] = file.trees.flatMap((tree, t) =>
    tree.strands.map((line) => ({ line, tree: t + 1, crossLink: 0 as const })),
  );
  for (const line of file.crossLinks ?? []) lines.push({ line, tree: 0, crossLink: 1 });
  const points: number[] = [];
  const radius: number[] = [];
  const offsets: number[] = [];
  for (const { line } of lines) {
    const [from, to] = [nodes.get(line.from), nodes.get(line.to)];
    // Exactly at the nodes: lines that meet are found again by their ends.
    const course = [from!.position, ...centreline(line, from, to).slice(1, -1), to!.position];
    course.forEach((p, i) => {
      points.push(p[0], p[1], p[2]);
      radius.push((line.points && line.radii?.[i]) ?? Number.NaN);
    });
    offsets.push(radius.length);
  }
  const connectivity = radius.map((_, i) => i);
  const cellData = [
    ints(
      "tree",
      lines.map(({ tree }) => tree),
    ),
    ints(
      "strand",
      lines.map((_, i) => i + 1),
    ),
    ints(
      "crossLink",
      lines.map(({ crossLink }) => crossLink),
    ),
  ];
  const counts = {
    NumberOfPoints: radius.length,
    NumberOfVerts: 0,
    NumberOfLines: lines.length,
    NumberOfStrips: 0,
    NumberOfPolys: 0,
  };
  const piece = xmlTag(
    "Piece",
    counts,
    [
      xmlTag("PointData", { Scalars: "radius" }, doubles("radius", radius, 1)),
      xmlTag("CellData", {}, cellData.join("")),
      xmlTag("Points", {}, doubles("Points", points, 3)),
      xmlTag("Lines", {}, ints("connectivity", connectivity) + ints("offsets", offsets)),
    ].join("\n"),
  );
  const field = [
    strings("unit", ["mm"]),
    strings("frame", [frameOf(file)]),
    ...(file.volume?.name ? [strings("specimen", [file.volume.name])] : []),
    strings(
      "treeIds",
      file.trees.map((tree) => tree.id),
    ),
    strings(
      "treeNames",
      file.trees.map((tree) => tree.name ?? ""),
    ),
    strings(
      "strandIds",
      lines.map(({ line }) => line.id),
    ),
  ].join("\n");
  const data = xmlTag("PolyData", {}, `\n${xmlTag("FieldData", {}, field)}\n${piece}\n`);
  const attributes = { type: "PolyData", version: "1.0", byte_order: "LittleEndian", header_type: "UInt64" };
  return `<?xml version="1.0"?>\n${xmlTag("VTKFile", attributes, `\n${data}\n`)}\n`;
}

/** What PolyData does not keep of this file, one sentence each. */
export function vtpLosses(file: ChordaeFile): string[] {
  const has = holdingsOf(file);
  return sentences([
    [true, "Kinds of nodes, roots and all labels are not kept: forks and ends are places where lines meet or stop."],
    [has.untraced, "Strands that are not traced are written as straight stretches through their pins."],
    [has.pins || has.provenance, "Pins, image fit and the way strands were made are not kept."],
    [has.radiiBelowResolution, "Radii below resolution and radii never measured are both NaN."],
    [has.scan, "Of the scan only its name is kept."],
    [has.specimen || has.protocol || has.landmarks, "Facts of the specimen, the protocol and landmarks are not kept."],
    [has.emptyTrees || hasLoneNodes(file), "Nodes without a strand are not kept."],
    [has.unknown, "Keys of the tree file that this program does not know are not kept."],
  ]);
}

function hasLoneNodes(file: ChordaeFile): boolean {
  const ends = new Set(file.trees.flatMap((tree) => tree.strands.flatMap(({ from, to }) => [from, to])));
  return file.trees.some((tree) => tree.nodes.some((node) => !ends.has(node.id)));
}

function dataArray(name: string, type: string, bytes: Uint8Array, components: number): string {
  const head = new Uint8Array(8);
  new DataView(head.buffer).setBigUint64(0, BigInt(bytes.length), true);
  const all = new Uint8Array(8 + bytes.length);
  all.set(head);
  all.set(bytes, 8);
  return xmlTag("DataArray", { type, Name: name, NumberOfComponents: components, format: "binary" }, toBase64(all));
}

function doubles(name: string, values: readonly number[], components: number): string {
  const bytes = new Uint8Array(8 * values.length);
  const view = new DataView(bytes.buffer);
  values.forEach((value, i) => {
    view.setFloat64(8 * i, value, true);
  });
  return dataArray(name, "Float64", bytes, components);
}

function ints(name: string, values: readonly number[]): string {
  const bytes = new Uint8Array(4 * values.length);
  const view = new DataView(bytes.buffer);
  values.forEach((value, i) => {
    view.setInt32(4 * i, value, true);
  });
  return dataArray(name, "Int32", bytes, 1);
}

/** Texts as the format holds them: UTF-8 codes, each text closed by 0. */
function strings(name: string, values: readonly string[]): string {
  const codes = values.flatMap((value) => [...new TextEncoder().encode(value.replaceAll("\0", "\uFFFD")), 0]);
  return xmlTag("Array", { type: "String", Name: name, NumberOfTuples: values.length, format: "ascii" }, codes.join(" "));
}
