import { unreadable } from "#shared/errors.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { CHORDAE_FORMAT, CHORDAE_VERSION } from "#shared/formats/chordae/chordae-file.ts";
import type { ReadTwin } from "#shared/formats/read-twin.ts";
import { type PlainLines, treesOfLines } from "#shared/formats/vtp/lines-to-trees.ts";
import { type VtkEncoding, vtkNumbers, vtkStrings } from "#shared/formats/vtp/vtk-arrays.ts";
import { childElements, readXml, type XmlElement } from "#shared/formats/xml/read-xml.ts";

/**
 * The trees in a VTK XML PolyData file: its lines, parted where another line's end lies on them. Point data `radius` and cell
 * data `tree` are used where they are there; nodes get their kind from how many lines meet. Text or base64 arrays, appended
 * data, both byte orders and zlib are read.
 * @throws unreadable-input for other XML, arrays that do not fit together, or sizes that lie.
 */
export function readVtp(bytes: Uint8Array, fileName: string): ReadTwin {
  const { text, appended } = splitAppended(bytes);
  const root = readXml(text, fileName);
  if (root.name !== "VTKFile" || root.attributes.type !== "PolyData")
    throw unreadable(fileName, "a VTKFile of type PolyData", `<${root.name} type="${root.attributes.type ?? ""}">`);
  const compressor = root.attributes.compressor ?? "";
  if (compressor !== "" && compressor !== "vtkZLibDataCompressor")
    throw unreadable(
      fileName,
      "no compression, or vtkZLibDataCompressor",
      compressor.slice(0, 60),
      undefined,
      "Write it uncompressed.",
    );
  const encoding: VtkEncoding = {
    file: fileName,
    littleEndian: root.attributes.byte_order !== "BigEndian",
    headerBytes: root.attributes.header_type === "UInt64" ? 8 : 4,
    compressed: compressor !== "",
    appended,
  };
  const data = only(root, "PolyData", fileName);
  const notes: string[] = [];
  const field = fieldStrings(data, encoding);
  const unit = field.get("unit")?.[0];
  if (unit !== undefined && unit !== "mm")
    throw unreadable(fileName, "unit mm", unit.slice(0, 40), "FieldData unit", "Convert the lengths to millimetres first.");
  if (unit === undefined) notes.push("The file names no unit; its places were taken as millimetres.");
  const pieces = childElements(data, "Piece").map((piece) => linesOf(piece, encoding));
  const { trees, crossLinks, parted } = treesOfLines(pieces, field);
  if (parted > 0) notes.push(`${parted} lines were parted where another line ends on them.`);
  notes.push(
    "Kinds of nodes come from how many lines meet; ends are open and trees without a root until somebody says otherwise.",
  );
  const frame = field.get("frame")?.[0];
  const file = {
    format: CHORDAE_FORMAT,
    version: CHORDAE_VERSION,
    unit: "mm",
    ...(frame !== undefined && { frame }),
    trees,
    ...(crossLinks.length > 0 && { crossLinks }),
  };
  return { file: checkChordaeFile(file, fileName), notes };
}

/** Raw appended data is no XML: it is cut out before the text is parsed. */
function splitAppended(bytes: Uint8Array): { text: string; appended: VtkEncoding["appended"] } {
  const decoder = new TextDecoder("latin1");
  const text = decoder.decode(bytes);
  const open = /<AppendedData\b([^>]*)>\s*_/.exec(text);
  // Everything but raw data is UTF-8.
  if (!open) return { text: new TextDecoder().decode(bytes), appended: null };
  const start = open.index + open[0].length;
  const end = text.lastIndexOf("</AppendedData>");
  const stop = end < start ? bytes.length : end;
  const head = new TextDecoder().decode(bytes.subarray(0, open.index));
  const base64 = /encoding\s*=\s*"base64"/.test(open[1] ?? "");
  const tail = stop === bytes.length ? "" : text.slice(stop + "</AppendedData>".length);
  return { text: head + tail, appended: { bytes: bytes.subarray(start, stop), base64 } };
}

function only(parent: XmlElement, name: string, fileName: string): XmlElement {
  const found = childElements(parent, name);
  if (found.length !== 1) throw unreadable(fileName, `one <${name}> in <${parent.name}>`, `${found.length}`);
  return found[0]!;
}

function fieldStrings(data: XmlElement, encoding: VtkEncoding): Map<string, string[]> {
  const arrays = childElements(data, "FieldData").flatMap((field) => childElements(field, "Array"));
  const texts = arrays.filter((array) => array.attributes.type === "String");
  return new Map(texts.map((array) => [array.attributes.Name ?? "", vtkStrings(array, encoding)]));
}

function linesOf(piece: XmlElement, encoding: VtkEncoding): PlainLines {
  const { file } = encoding;
  const array = (section: string, name: string | null): Float64Array | undefined => {
    const arrays = childElements(piece, section).flatMap((element) => childElements(element, "DataArray"));
    const found = name === null ? arrays[0] : arrays.find((element) => element.attributes.Name === name);
    return found && vtkNumbers(found, encoding);
  };
  const declared = (name: string) => Number(piece.attributes[name] ?? 0);
  const points = array("Points", null) ?? new Float64Array(0);
  if (points.length !== 3 * declared("NumberOfPoints"))
    throw unreadable(file, `${declared("NumberOfPoints")} points of three numbers`, `${points.length} numbers`, "Points");
  const offsets = array("Lines", "offsets") ?? new Float64Array(0);
  const connectivity = array("Lines", "connectivity") ?? new Float64Array(0);
  if (offsets.length !== declared("NumberOfLines"))
    throw unreadable(file, `${declared("NumberOfLines")} lines`, `${offsets.length} offsets`, "Lines");
  const lines: number[][] = [];
  let from = 0;
  for (const to of offsets) {
    if (!Number.isInteger(to) || to < from || to > connectivity.length)
      throw unreadable(file, `offsets that rise to ${connectivity.length}`, String(to), "Lines, offsets");
    lines.push([...connectivity.subarray(from, to)]);
    from = to;
  }
  for (const index of connectivity)
    if (!Number.isInteger(index) || index < 0 || 3 * index >= points.length)
      throw unreadable(file, `point numbers below ${points.length / 3}`, String(index), "Lines, connectivity");
  const radius = array("PointData", "radius");
  if (radius && radius.length !== points.length / 3)
    throw unreadable(file, `${points.length / 3} radii`, `${radius.length}`, "PointData radius");
  // Cell data run over vertices first, then lines.
  const cells = (name: string) => {
    const values = array("CellData", name);
    const first = declared("NumberOfVerts");
    return values && values.length >= first + lines.length ? values.subarray(first, first + lines.length) : undefined;
  };
  return { points, lines, radius, tree: cells("tree"), strand: cells("strand"), crossLink: cells("crossLink") };
}
