import { type TautlineError, unreadable } from "#shared/errors.ts";
import {
  CHORDAE_FORMAT,
  CHORDAE_VERSION,
  type ChordaeFile,
  type FileLine,
  type FileNode,
  type FileTree,
} from "#shared/formats/chordae/chordae-file.ts";
import { validate } from "#shared/formats/chordae/schema-check.generated.ts";
import { distance } from "#shared/geometry/vec3.ts";

/** How far an end of a centreline may lie from its node, millimetres. */
export const END_TOLERANCE_MM = 1e-3;

type Refuse = (where: string, expected: string, found: string, next?: string) => TautlineError;

/**
 * The value as a tree file, when it is one: of the known version, in millimetres, as the schema says, with ids used once and
 * naming something, and with points, radii and nodes that fit. Structural faults (no root, not connected, loops, strands
 * without points) pass: they are findings, not malformed.
 * @throws unreadable-input naming the file, the place, what was expected and what was found.
 */
export function checkChordaeFile(value: unknown, fileName: string): ChordaeFile {
  const refuse: Refuse = (where, expected, found, next) => unreadable(fileName, expected, found, where, next);
  checkIdentity(value, refuse);
  if (!validate(value)) throw schemaFault(value, refuse);
  const file = value as unknown as ChordaeFile;
  const nodes = checkIds(file, refuse);
  file.trees.forEach((tree, i) => {
    checkTree(tree, `trees[${i}]`, refuse);
  });
  file.crossLinks?.forEach((link, i) => {
    const where = `crossLinks[${i}]`;
    for (const end of ["from", "to"] as const)
      if (!nodes.has(link[end])) throw refuse(`${where}.${end}`, "the id of a node in this file", quoted(link[end]));
    checkLine(link, where, nodes, refuse);
  });
  return file;
}

/** Format, version and unit come first: what is wrong with them explains everything else. */
function checkIdentity(value: unknown, refuse: Refuse): void {
  if (typeof value !== "object" || value === null || Array.isArray(value))
    throw refuse("whole file", "a JSON object with the trees", quoted(value));
  const { format, version, unit } = value as { format?: unknown; version?: unknown; unit?: unknown };
  if (format !== CHORDAE_FORMAT) throw refuse("format", `"${CHORDAE_FORMAT}"`, quoted(format));
  if (typeof version === "number" && version > CHORDAE_VERSION) {
    const next = "A newer Tautline wrote this file; open it with that one.";
    throw refuse("version", String(CHORDAE_VERSION), String(version), next);
  }
  if (version !== CHORDAE_VERSION) throw refuse("version", String(CHORDAE_VERSION), quoted(version));
  if (unit !== "mm") throw refuse("unit", '"mm"', quoted(unit), "Convert the lengths to millimetres first.");
}

interface SchemaError {
  readonly instancePath: string;
  readonly keyword: string;
  readonly params: Readonly<Record<string, unknown>>;
  readonly message?: string;
}

function schemaFault(value: unknown, refuse: Refuse): TautlineError {
  const errors = (validate as { errors?: readonly SchemaError[] | null }).errors ?? [];
  // Of alternatives (null or a volume) the last message only says that none fits; the one deepest inside says why.
  const error = [...errors].sort((a, b) => b.instancePath.length - a.instancePath.length)[0];
  if (!error) return refuse("whole file", "a valid tree file", "another structure");
  const steps = error.instancePath.split("/").slice(1);
  const names = steps.map((step) => step.replaceAll("~1", "/").replaceAll("~0", "~"));
  let found: unknown = value;
  for (const name of names) found = (found as Record<string, unknown> | undefined)?.[name];
  const where =
    names
      .map((name) => (/^\d+$/.test(name) ? `[${name}]` : `.${name}`))
      .join("")
      .replace(/^\./, "") || "whole file";
  if (error.keyword === "required") {
    const missing = String(error.params.missingProperty);
    return refuse(where === "whole file" ? missing : `${where}.${missing}`, `the key "${missing}"`, "nothing");
  }
  return refuse(where, expectation(error), quoted(found));
}

function expectation(error: SchemaError): string {
  const { allowedValues, type, limit, pattern } = error.params;
  if (Array.isArray(allowedValues)) return `one of ${allowedValues.join(", ")}`;
  if (error.keyword === "type")
    return [type]
      .flat()
      .map((word) => (word === "number" ? "finite number" : String(word)))
      .join(" or ");
  if (error.keyword === "minItems") return `at least ${limit} entries`;
  if (error.keyword === "maxItems") return `at most ${limit} entries`;
  if (error.keyword === "pattern") return pattern === "^[\\s\\S]" ? "a text that is not empty" : `text of the form ${pattern}`;
  return error.message?.replace(/^must (be|have|match) /, "") ?? error.keyword;
}

/** All nodes by id. One list of used ids serves trees, nodes, strands and cross-links. */
function checkIds(file: ChordaeFile, refuse: Refuse): Map<string, FileNode> {
  const places = new Map<string, string>();
  const nodes = new Map<string, FileNode>();
  const take = (id: string, where: string) => {
    const before = places.get(id);
    if (before !== undefined)
      throw refuse(`${where}.id`, "an id used only once in the file", `${quoted(id)}, the id of ${before}`);
    places.set(id, where);
  };
  file.trees.forEach((tree, t) => {
    take(tree.id, `trees[${t}]`);
    tree.nodes.forEach((node, n) => {
      take(node.id, `trees[${t}].nodes[${n}]`);
      nodes.set(node.id, node);
    });
    tree.strands.forEach((strand, s) => {
      take(strand.id, `trees[${t}].strands[${s}]`);
    });
  });
  file.crossLinks?.forEach((link, x) => {
    take(link.id, `crossLinks[${x}]`);
  });
  return nodes;
}

function checkTree(tree: FileTree, where: string, refuse: Refuse): void {
  const own = new Map(tree.nodes.map((node) => [node.id, node]));
  if (tree.root !== null && !own.has(tree.root))
    throw refuse(`${where}.root`, "the id of a node of this tree, or null", quoted(tree.root));
  tree.strands.forEach((strand, s) => {
    const place = `${where}.strands[${s}]`;
    for (const end of ["from", "to"] as const)
      if (!own.has(strand[end])) throw refuse(`${place}.${end}`, "the id of a node of this tree", quoted(strand[end]));
    checkLine(strand, place, own, refuse);
    const legs = (strand.via?.length ?? 0) + 1;
    if (strand.legs && strand.legs.length !== legs)
      throw refuse(`${place}.legs`, `${legs} entries, one more than pins in via`, String(strand.legs.length));
  });
}

function checkLine(line: FileLine, where: string, nodes: ReadonlyMap<string, FileNode>, refuse: Refuse): void {
  const count = line.points?.length ?? 0;
  if (count === 1) throw refuse(`${where}.points`, "two points or more, or none when not traced", "1");
  if (line.radii && line.radii.length !== count)
    throw refuse(`${where}.radii`, `${count} radii, one per point`, String(line.radii.length));
  line.madeBy?.forEach(([first, last], i) => {
    if (first > last || last >= count)
      throw refuse(`${where}.madeBy[${i}]`, `two point indices in order, below ${count}`, `${first} and ${last}`);
  });
  if (!line.points || count === 0) return;
  const ends = [
    ["from", 0],
    ["to", count - 1],
  ] as const;
  for (const [end, index] of ends) {
    const gap = distance(line.points[index]!, nodes.get(line[end])!.position);
    if (gap > END_TOLERANCE_MM) {
      const expected = `a point within ${END_TOLERANCE_MM} mm of node ${quoted(line[end])}`;
      throw refuse(`${where}.points[${index}]`, expected, `one ${Number(gap.toPrecision(4))} mm away`);
    }
  }
}

function quoted(value: unknown): string {
  if (value === undefined) return "nothing";
  if (typeof value === "number") return String(value);
  if (Array.isArray(value)) return `a list of ${value.length}`;
  if (typeof value === "object" && value !== null) return "an object";
  const text = JSON.stringify(value);
  return text.length > 60 ? `${text.slice(0, 57)}..."` : text;
}
