import vtkDataArray from "@kitware/vtk.js/Common/Core/DataArray.js";
import vtkPolyData from "@kitware/vtk.js/Common/DataModel/PolyData.js";
import vtkXMLPolyDataReader from "@kitware/vtk.js/IO/XML/XMLPolyDataReader.js";
// @ts-expect-error this module has no types
import vtkXMLPolyDataWriter from "@kitware/vtk.js/IO/XML/XMLPolyDataWriter.js";
import { zlibSync } from "fflate";
import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { readVtp } from "#shared/formats/vtp/read-vtp.ts";
import { vtpLosses, writeVtp } from "#shared/formats/vtp/write-vtp.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

const bytesOf = (text: string) => new TextEncoder().encode(text);
const taken = (value: unknown) => parseChordaeFile(JSON.stringify(value), "f");
const truth = blockPhantom({ name: "p", seed: 4, size: [96, 64, 64], spacingMm: 0.04, trees: 2, noise: 0 }).truth;

/** What vtk.js, an independent reader, finds in a file. */
function independent(text: string) {
  const reader = vtkXMLPolyDataReader.newInstance();
  reader.parseAsArrayBuffer(bytesOf(text).buffer);
  return reader.getOutputData(0);
}

describe("VTK PolyData", () => {
  it("is read by an independent reader with the same lines, radii and numbers of trees", () => {
    const data = independent(writeVtp(truth));
    const strands = truth.trees.flatMap((tree) => tree.strands);
    const points = data.getPoints().getData();
    const cells = [...data.getLines().getData()];
    const radius = data.getPointData().getArrayByName("radius").getData();
    const tree = data.getCellData().getArrayByName("tree").getData();
    expect(tree.length).toBe(strands.length);
    let at = 0;
    strands.forEach((strand, s) => {
      const count = cells[at]!;
      expect(count).toBe(strand.points!.length);
      strand.points!.forEach((p, i) => {
        const index = cells[at + 1 + i]!;
        expect([...points.slice(3 * index, 3 * index + 3)]).toEqual(p);
        expect(radius[index]).toBe(strand.radii![i]);
      });
      expect(truth.trees[tree[s] - 1]!.strands).toContain(strand);
      at += count + 1;
    });
    expect(at).toBe(cells.length);
    const field = data.getFieldData();
    expect(field.getArrayByName("unit").getValue(0)).toBe("mm");
    expect(field.getArrayByName("treeNames").getValue(1)).toBe(truth.trees[1]!.name);
  });

  it("comes back with the same trees, strands and radii; kinds and roots are said to be lost", () => {
    const { file } = readVtp(bytesOf(writeVtp(truth)), "f.vtp");
    expect(file.frame).toBe("LPS");
    expect(file.trees.map((tree) => [tree.id, tree.name])).toEqual(truth.trees.map((tree) => [tree.id, tree.name]));
    file.trees.forEach((tree, t) => {
      expect(tree.strands.map(({ id, points, radii }) => ({ id, points, radii }))).toEqual(
        truth.trees[t]!.strands.map(({ id, points, radii }) => ({ id, points, radii })),
      );
      const forks = (nodes: readonly { kind: string }[]) => nodes.filter((node) => node.kind === "fork").length;
      expect([tree.nodes.length, forks(tree.nodes)]).toEqual([truth.trees[t]!.nodes.length, forks(truth.trees[t]!.nodes)]);
      expect(tree.root).toBeNull();
    });
    expect(vtpLosses(truth).join(" ")).toMatch(/Kinds of nodes/);
  });

  it("keeps cross-links, untraced strands as stretches through their pins, and null radii as NaN", () => {
    const { file } = readVtp(bytesOf(writeVtp(taken(sampleFile()))), "f");
    const [tree] = file.trees;
    expect(tree!.strands.find((strand) => strand.id === "s1")!.radii).toEqual([0.5, null, 0.4]);
    expect(tree!.strands.find((strand) => strand.id === "s2")).toMatchObject({
      points: [
        [1, 0, 8],
        [0.5, 0, 6],
        [0, 0, 4],
      ],
    });
    expect(file.crossLinks).toMatchObject([
      {
        id: "x1",
        points: [
          [1, 0, 8],
          [-1, 0, 8],
        ],
        radii: [0.1, 0.1],
      },
    ]);
    const places = new Map(tree!.nodes.map((node) => [node.id, node.position]));
    expect([places.get(file.crossLinks![0]!.from), places.get(file.crossLinks![0]!.to)]).toEqual([
      [1, 0, 8],
      [-1, 0, 8],
    ]);
  });

  it("reads what an independent writer wrote, and parts lines where another ends on them", () => {
    const data = vtkPolyData.newInstance();
    data.getPoints().setData(Float32Array.from([0, 0, 0, 0, 0, 2, 0, 0, 4, 1, 0, 4]), 3);
    data.getLines().setData(Uint32Array.from([3, 0, 1, 2, 2, 1, 3]));
    data
      .getPointData()
      .addArray(vtkDataArray.newInstance({ name: "radius", values: Float32Array.from([0.5, 0.25, 0.5, 0.125]) }));
    const text: string = vtkXMLPolyDataWriter.newInstance().write(data);
    const { file, notes } = readVtp(bytesOf(text), "other.vtp");
    expect(file.trees.length).toBe(1);
    expect(file.trees[0]!.strands.map((strand) => strand.radii)).toEqual([
      [0.5, 0.25],
      [0.25, 0.5],
      [0.25, 0.125],
    ]);
    expect(file.trees[0]!.nodes.map((node) => node.kind).sort()).toEqual(["fork", "open", "open", "open"]);
    expect(notes.join(" ")).toMatch(/1 lines were parted/);
    expect(file.frame).toBeUndefined();
  });

  const doubles = Float64Array.from([0, 0, 0, 1, 0, 0, 2, 1, 0]);
  const body = (points: string, more = "") =>
    `<PolyData><Piece NumberOfPoints="3" NumberOfLines="1"><Points>${points}</Points><Lines>
      <DataArray type="Int64" Name="connectivity" format="ascii">0 1 2</DataArray>
      <DataArray type="Int64" Name="offsets" format="ascii">3</DataArray></Lines></Piece></PolyData>${more}`;
  const pointsOf = (bytes: Uint8Array) => readVtp(bytes, "f").file.trees[0]!.strands[0]!.points;
  const expected = [
    [0, 0, 0],
    [1, 0, 0],
    [2, 1, 0],
  ];

  it("reads text arrays, raw and base64 appended data, zlib blocks and the other byte order", () => {
    const ascii = `<VTKFile type="PolyData">${body('<DataArray type="Float32" NumberOfComponents="3" format="ascii">0 0 0 1 0 0 2 1 0</DataArray>')}</VTKFile>`;
    expect(pointsOf(bytesOf(ascii))).toEqual(expected);

    const raw = new Uint8Array(4 + 72);
    new DataView(raw.buffer).setUint32(0, 72, true);
    raw.set(new Uint8Array(doubles.buffer), 4);
    const appendedArray = '<DataArray type="Float64" NumberOfComponents="3" format="appended" offset="0"/>';
    const head = (encoding: string) =>
      bytesOf(`<VTKFile type="PolyData" byte_order="LittleEndian">${body(appendedArray)}<AppendedData encoding="${encoding}">_`);
    const tail = bytesOf("</AppendedData></VTKFile>");
    expect(pointsOf(Buffer.concat([head("raw"), raw, tail]))).toEqual(expected);
    expect(pointsOf(Buffer.concat([head("base64"), Buffer.from(Buffer.from(raw).toString("base64")), tail]))).toEqual(expected);

    const big = new DataView(new ArrayBuffer(8 + 72));
    big.setBigUint64(0, 72n);
    doubles.forEach((value, i) => {
      big.setFloat64(8 + 8 * i, value);
    });
    const bigText = `<VTKFile type="PolyData" byte_order="BigEndian" header_type="UInt64">${body(`<DataArray type="Float64" NumberOfComponents="3" format="binary">${Buffer.from(big.buffer).toString("base64")}</DataArray>`)}</VTKFile>`;
    expect(pointsOf(bytesOf(bigText))).toEqual(expected);

    const blocks = [zlibSync(new Uint8Array(doubles.buffer, 0, 48)), zlibSync(new Uint8Array(doubles.buffer, 48, 24))];
    const sizes = Uint32Array.from([2, 48, 24, blocks[0]!.length, blocks[1]!.length]);
    const packed = Buffer.from(sizes.buffer).toString("base64") + Buffer.concat(blocks).toString("base64");
    const zlib = `<VTKFile type="PolyData" compressor="vtkZLibDataCompressor">${body(`<DataArray type="Float64" NumberOfComponents="3" format="binary">${packed}</DataArray>`)}</VTKFile>`;
    expect(pointsOf(bytesOf(zlib))).toEqual(expected);
  });

  const array = (attributes: string, inside: string) =>
    `<VTKFile type="PolyData">${body(`<DataArray ${attributes}>${inside}</DataArray>`)}</VTKFile>`;
  const lie = Buffer.from(Uint32Array.from([0xfffffff0]).buffer).toString("base64");
  it.each([
    ["another type", '<VTKFile type="ImageData"/>', /PolyData/],
    ["a DOCTYPE", "<!DOCTYPE a><VTKFile/>", /DOCTYPE/],
    ["an unknown compressor", '<VTKFile type="PolyData" compressor="vtkLZ4DataCompressor"/>', /vtkLZ4/],
    ["too few points", array('type="Float32" format="ascii"', "0 0 0"), /3 points/],
    ["words for numbers", array('type="Float32" format="ascii"', "a b c"), /'a'/],
    ["an unknown number type", array('type="Float16" format="ascii"', "0"), /Float16/],
    ["a size that lies", array('type="Float32" format="binary"', lie), /at most/],
    ["text that is no base64", array('type="Float32" format="binary"', "*?*?*?*?"), /base64/],
    ["appended data that are not there", array('type="Float32" format="appended" offset="0"', ""), /AppendedData/],
  ])("refuses %s in one sentence", (_, text, says) => {
    try {
      readVtp(bytesOf(text), "bad.vtp");
      throw new Error("taken");
    } catch (error) {
      if (!isTautlineError(error, "unreadable-input")) throw error;
      expect(error.message).toMatch(says);
      expect(error.message).toContain("bad.vtp");
    }
  });

  it("refuses other units, points that are not there, and mutated bytes without any other fault", () => {
    const text = writeVtp(taken(sampleFile()));
    expect(() => readVtp(bytesOf(text.replace(">109 109 0<", ">117 109 0<")), "f")).toThrow(/unit mm, found um/);
    const bytes = bytesOf(text);
    for (let k = 0; k < 200; k++) {
      const copy = bytes.slice(0, k % 3 === 0 ? (k * 7919) % bytes.length : bytes.length);
      if (k % 3 !== 0) copy[(k * 104729) % copy.length] = (k * 31) % 256;
      try {
        readVtp(copy, "mutated");
      } catch (error) {
        if (!isTautlineError(error, "unreadable-input")) throw error;
      }
    }
  });
});
