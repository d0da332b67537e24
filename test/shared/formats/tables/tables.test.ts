import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { COLUMNS } from "#shared/formats/tables/columns.ts";
import { readCsv, writeCsv } from "#shared/formats/tables/csv.ts";
import { readTables } from "#shared/formats/tables/read-tables.ts";
import { tablesLosses, writeTables } from "#shared/formats/tables/write-tables.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

const taken = (value: unknown) => parseChordaeFile(JSON.stringify(value), "f");
const textsOf = (value: unknown) =>
  Object.fromEntries(writeTables(taken(value)).map(({ name, text }) => [name.replace(".csv", ""), text])) as Record<
    "nodes" | "strands" | "trees" | "columns",
    string
  >;

describe("comma-separated text", () => {
  // The examples of RFC 4180, section 2.
  it.each([
    ["aaa,bbb,ccc\r\nzzz,yyy,xxx\r\n", [{ aaa: "zzz", bbb: "yyy", ccc: "xxx" }]],
    ["aaa,bbb,ccc\r\nzzz,yyy,xxx", [{ aaa: "zzz", bbb: "yyy", ccc: "xxx" }]],
    ['"aaa","b\r\nbb","ccc"\r\nzzz,yyy,xxx', [{ aaa: "zzz", "b\r\nbb": "yyy", ccc: "xxx" }]],
    ['a,b\n"say ""hi""",\n', [{ a: 'say "hi"', b: "" }]],
    ["a,b\n,", [{ a: "", b: "" }]],
  ])("is read as RFC 4180 says: %j", (text, rows) => {
    expect(readCsv(text, "f.csv")).toEqual(rows);
  });

  it("comes back from what is written, whatever the cells hold", () => {
    const cells = ["plain", "with, comma", 'with "quote"', "two\r\nlines", "", "=1+1", "ü"];
    const [row] = readCsv(writeCsv([cells.map((_, i) => `c${i}`), cells]), "f");
    expect(Object.values(row!)).toEqual(cells);
  });

  it.each([
    ['a,b\n"open', /closing quote/],
    ["a,b\n1", /2 cells/],
    ['a,b\n"1"x,2', /comma or a line end/],
    ["", /header line/],
  ])("is refused when broken: %j", (text, says) => {
    expect(() => readCsv(text, "f.csv")).toThrow(says);
  });
});

describe("tables of trees", () => {
  it("have the declared columns, units in their names, and a dictionary that explains each", () => {
    const texts = textsOf(sampleFile());
    const dictionary = readCsv(texts.columns, "columns.csv");
    for (const [name, columns] of Object.entries(COLUMNS)) {
      expect(Object.keys(readCsv(texts[name as "nodes"], name)[0]!)).toEqual(columns.map((column) => column.name));
      for (const column of columns)
        expect(dictionary).toContainEqual(expect.objectContaining({ table: `${name}.csv`, column: column.name }));
    }
    expect(dictionary.find((row) => row.column === "frame")!.meaning).toMatch(/LPS/);
  });

  it("hold places, labels and lengths", () => {
    const texts = textsOf(sampleFile());
    const nodes = readCsv(texts.nodes, "n");
    expect(nodes[2]).toMatchObject({
      id: "n3",
      kind: "insertion",
      x_mm: "1",
      z_mm: "8",
      leaflet: "anterior",
      segment: "A2",
      cleft: "false",
    });
    const strands = readCsv(texts.strands, "s");
    // Two hypotenuses of 0.1 by 2.
    expect(Number(strands[0]!.length_mm)).toBeCloseTo(2 * Math.hypot(0.1, 2), 6);
    expect(strands[0]).toMatchObject({ strut: "true", straight_length_mm: "4", order: "1", trunk: "true", traced: "true" });
    expect(strands[1]!.traced).toBe("false");
    expect(strands[3]).toMatchObject({ id: "x1", kind: "cross-link", tree: "", length_mm: "2" });
    expect(readCsv(texts.trees, "t")).toMatchObject([{ id: "t1", name: "ALPM-03", root: "n1", strands: "3" }]);
  });

  it("come back with nodes, labels, strands and cross-links, without centrelines", () => {
    const { file, notes } = readTables(textsOf(sampleFile()), "folder");
    const [tree] = sampleFile().trees;
    const { support: _support, ...fork } = tree.nodes[1];
    expect(file.trees).toMatchObject([{ id: "t1", name: "ALPM-03", root: "n1" }]);
    expect(file.trees[0]!.nodes).toEqual([tree.nodes[0], fork, tree.nodes[2], tree.nodes[3]]);
    expect(file.trees[0]!.strands).toEqual([
      { id: "s1", from: "n1", to: "n2", strut: true, certainty: "sure" },
      { id: "s2", from: "n3", to: "n2" },
      { id: "s3", from: "n2", to: "n4" },
    ]);
    expect(file.crossLinks).toEqual([{ id: "x1", from: "n3", to: "n4" }]);
    expect(file.frame).toBe("LPS");
    expect(notes.join(" ")).toMatch(/no centrelines/);
    expect(tablesLosses(taken(sampleFile())).join(" ")).toMatch(/Centrelines/);
  });

  it.each([
    ["nodes", "id,kind,x_mm,y_mm\nn1,fork,0,0\n", /column z_mm/],
    ["nodes", "id,kind,x_mm,y_mm,z_mm\nn1,fork,0,,0\n", /node n1, y_mm/],
    ["nodes", "id,kind,x_mm,y_mm,z_mm\nn1,knot,0,0,0\n", /one of origin/],
    ["strands", "id,from,to\ns1,n1,n99\n", /node of this tree/],
  ] as const)("are refused when %s is wrong", (name, text, says) => {
    try {
      readTables({ ...textsOf(sampleFile()), [name]: text }, "folder");
      throw new Error("taken");
    } catch (error) {
      if (!isTautlineError(error, "unreadable-input")) throw error;
      expect(error.message).toMatch(says);
    }
  });
});
