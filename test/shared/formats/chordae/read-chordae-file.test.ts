import { describe, expect, it } from "vitest";
import { isTautlineError, type TautlineError } from "#shared/errors.ts";
import { parseChordaeBytes, parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

function refusal(text: string): TautlineError<"unreadable-input"> {
  try {
    parseChordaeFile(text, "trees.chordae.json");
  } catch (error) {
    if (isTautlineError(error, "unreadable-input")) return error;
    throw error;
  }
  throw new Error("the file was taken");
}

function without(object: Record<string, unknown>, ...keys: string[]): void {
  for (const key of keys) delete object[key];
}

type Break = (file: ReturnType<typeof sampleFile>) => void;

describe("a malformed tree file is refused, naming file, place, expected and found", () => {
  const cases: [string, Break, string, RegExp, RegExp][] = [
    ["another format", (f) => (f.format = "x"), "format", /chordae-trees/, /"x"/],
    ["a newer version", (f) => (f.version = 2), "version", /^1$/, /^2$/],
    ["a version as text", (f) => (f.version = "1"), "version", /^1$/, /"1"/],
    ["another unit", (f) => (f.unit = "um"), "unit", /"mm"/, /"um"/],
    ["no unit", (f) => delete f.unit, "unit", /"mm"/, /nothing/],
    ["no trees", (f) => delete f.trees, "trees", /key "trees"/, /nothing/],
    ["a tree without root", (f) => delete f.trees[0].root, "trees[0].root", /key "root"/, /nothing/],
    ["a node without place", (f) => delete f.trees[0].nodes[1].position, "trees[0].nodes[1].position", /key/, /nothing/],
    ["an unknown kind", (f) => (f.trees[0].nodes[1].kind = "leaf"), "trees[0].nodes[1].kind", /one of origin, fork/, /"leaf"/],
    ["a place of two numbers", (f) => f.trees[0].nodes[1].position.pop(), "trees[0].nodes[1].position", /at least 3/, /2/],
    ["a text as number", (f) => (f.trees[0].nodes[1].position[2] = "4"), "trees[0].nodes[1].position[2]", /finite number/, /"4"/],
    ["a null place", (f) => (f.trees[0].nodes[1].position[2] = null), "trees[0].nodes[1].position[2]", /finite number/, /null/],
    ["a node id used twice", (f) => (f.trees[0].nodes[2].id = "n2"), "trees[0].nodes[2].id", /used only once/, /"n2"/],
    ["a tree named as a node", (f) => (f.trees[0].id = "n2"), "trees[0].nodes[1].id", /used only once/, /trees\[0\]/],
    ["a cross-link named as a strand", (f) => (f.crossLinks[0].id = "s1"), "crossLinks[0].id", /used only once/, /"s1"/],
    ["an empty id", (f) => (f.trees[0].strands[1].id = ""), "trees[0].strands[1].id", /not empty/, /""/],
    ["a root that names nothing", (f) => (f.trees[0].root = "n9"), "trees[0].root", /node of this tree/, /"n9"/],
    ["a strand to nowhere", (f) => (f.trees[0].strands[1].to = "n9"), "trees[0].strands[1].to", /node of this tree/, /"n9"/],
    ["a strand to a strand", (f) => (f.trees[0].strands[1].to = "s1"), "trees[0].strands[1].to", /node of this tree/, /"s1"/],
    ["a cross-link to nowhere", (f) => (f.crossLinks[0].from = "n9"), "crossLinks[0].from", /node in this file/, /"n9"/],
    ["too few radii", (f) => f.trees[0].strands[0].radii.pop(), "trees[0].strands[0].radii", /3 radii/, /2/],
    ["radii without points", (f) => delete f.trees[0].strands[0].points, "trees[0].strands[0].radii", /0 radii/, /3/],
    ["a negative radius", (f) => (f.trees[0].strands[0].radii[0] = -1), "trees[0].strands[0].radii[0]", />= 0/, /-1/],
    [
      "a first point off its node",
      (f) => (f.trees[0].strands[0].points[0][0] = 0.0011),
      "trees[0].strands[0].points[0]",
      /"n1"/,
      /0.0011 mm/,
    ],
    [
      "a last point off its node",
      (f) => (f.trees[0].strands[0].points[2][1] = 1),
      "trees[0].strands[0].points[2]",
      /"n2"/,
      /1 mm/,
    ],
    ["one point", (f) => (f.trees[0].strands[2].points = [[0, 0, 4]]), "trees[0].strands[2].points", /two points or more/, /1/],
    [
      "a stretch past the points",
      (f) => (f.trees[0].strands[0].madeBy[1][1] = 3),
      "trees[0].strands[0].madeBy[1]",
      /below 3/,
      /1 and 3/,
    ],
    ["too many legs", (f) => f.trees[0].strands[0].legs.push("guide"), "trees[0].strands[0].legs", /2 entries/, /3/],
    ["a size that is no count", (f) => (f.volume.size[0] = 1.5), "volume.size[0]", /integer/, /1.5/],
    ["a hash that is none", (f) => (f.volume.sha256 = "abc"), "volume.sha256", /form/, /"abc"/],
  ];
  it.each(cases)("%s", (_, breakIt, where, expected, found) => {
    const file = sampleFile();
    breakIt(file);
    const error = refusal(JSON.stringify(file));
    expect(error.fields.where).toBe(where);
    expect(error.fields.expected).toMatch(expected);
    expect(error.fields.found).toMatch(found);
    expect(error.message).toContain("trees.chordae.json");
  });

  it("numbers that are not finite", () => {
    const text = JSON.stringify(sampleFile()).replace('"position":[0,0,4]', '"position":[0,0,1e999]');
    const { fields } = refusal(text);
    expect(fields).toMatchObject({ where: "trees[0].nodes[1].position[2]", expected: "finite number", found: "Infinity" });
  });

  it("text that is empty, cut, no object, or nested without end", () => {
    const whole = JSON.stringify(sampleFile());
    for (const text of ["", "  ", whole.slice(0, whole.length / 2), "[]", "null", "NaN", "[".repeat(100_000)]) {
      expect(refusal(text).message.length).toBeLessThan(400);
    }
  });

  it("every cut of the file, and bytes that are not UTF-8", () => {
    const whole = JSON.stringify(sampleFile());
    for (let end = 0; end < whole.length; end += 7) refusal(whole.slice(0, end));
    expect(() => parseChordaeBytes(Uint8Array.of(0x7b, 0xff, 0x7d), "a.chordae.json")).toThrow(/UTF-8/);
  });

  it("files with a few bytes changed, unless they are still valid", () => {
    const random = new SeededRandom(9);
    const whole = new TextEncoder().encode(JSON.stringify(sampleFile()));
    for (let k = 0; k < 2000; k++) {
      const bytes = whole.slice();
      for (let n = random.below(4); n >= 0; n--) bytes[random.below(bytes.length)] = random.below(256);
      try {
        parseChordaeBytes(bytes, "mutated.chordae.json");
      } catch (error) {
        if (!isTautlineError(error, "unreadable-input")) throw error;
      }
    }
  });

  it("says that a newer Tautline is needed for a newer version", () => {
    const file = sampleFile();
    file.version = 7;
    expect(refusal(JSON.stringify(file)).message).toMatch(/newer Tautline/);
  });
});

describe("a tree file that is only faulty is taken", () => {
  it.each<[string, Break]>([
    ["null root", (f) => (f.trees[0].root = null)],
    ["not connected", (f) => f.trees[0].strands.splice(2, 1)],
    ["loop", (f) => f.trees[0].strands.push({ id: "s9", from: "n3", to: "n4" })],
    ["no points", (f) => without(f.trees[0].strands[0], "points", "radii", "madeBy")],
    ["wrong degree", (f) => (f.trees[0].nodes[1].kind = "insertion")],
    ["no optional key at all", (f) => without(f, "frame", "volume", "landmarks", "crossLinks", "radii")],
    ["no volume", (f) => (f.volume = null)],
    ["an end 0.9 um off its node", (f) => (f.trees[0].strands[0].points[0][0] = 0.0009)],
  ])("%s", (_, breakIt) => {
    const file = sampleFile();
    breakIt(file);
    expect(parseChordaeFile(JSON.stringify(file), "f")).toEqual(file);
  });

  it("reads empty points as not traced", () => {
    const file = sampleFile();
    file.trees[0].strands[2].points = [];
    expect(parseChordaeFile(JSON.stringify(file), "f").trees[0]!.strands[2]).not.toHaveProperty("points");
  });

  it("reads past a byte order mark", () => {
    expect(parseChordaeFile(`\uFEFF${JSON.stringify(sampleFile())}`, "f")).toEqual(sampleFile());
  });
});

describe("writing", () => {
  it("gives back every key, known or not, and the same text each time", () => {
    const file = parseChordaeFile(JSON.stringify(sampleFile()), "f");
    const text = writeChordaeFile(file);
    expect(JSON.parse(text)).toEqual(sampleFile());
    expect(writeChordaeFile(parseChordaeFile(text, "f"))).toBe(text);
    expect(text.split("\n").filter((line) => line.includes('"kind"')).length).toBe(4);
  });

  it("keeps a key called __proto__ as a key", () => {
    const text = JSON.stringify(sampleFile()).replace('"project"', '"__proto__"');
    const back = JSON.parse(writeChordaeFile(parseChordaeFile(text, "f")));
    expect(Object.hasOwn(back, "__proto__")).toBe(true);
    expect(Object.getPrototypeOf({})).toBe(Object.prototype);
  });

  it("never writes what could not be read back", () => {
    const file = sampleFile();
    file.trees[0].nodes[0].position[0] = Number.NaN;
    expect(() => writeChordaeFile(file)).toThrow(/valid file/);
  });
});
