import { type ChordaeFile, type FileLine, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { EDGE_KEYS, GRAPH_KEYS, GRAPHML_NAMESPACE, type GraphmlType, NODE_KEYS } from "#shared/formats/graphml/graphml-keys.ts";
import { holdingsOf, sentences } from "#shared/formats/losses.ts";
import { xmlTag, xmlText } from "#shared/formats/xml/write-xml.ts";
import { roundMm } from "#shared/geometry/types.ts";
import { measureTrees } from "#shared/measure/measure-trees.ts";
import { radiusStatistics } from "#shared/measure/radius-statistics.ts";
import { centreline, strandLength } from "#shared/trees/plain-trees.ts";

type Value = string | number | boolean | null | undefined;

/**
 * The trees of a file as GraphML: one undirected graph, nodes with place, kind and labels, edges for strands and cross-links
 * with length, mean radius and the centreline as JSON text. The same file gives the same text.
 * @source GraphML 1.0 (graphs, keys, data; no ports, hyperedges or nesting).
 */
export function writeGraphml(file: ChordaeFile): string {
  const ids = tokenIds(file);
  const measured = new Map(measureTrees(file).strands.map((strand) => [strand.id, strand]));
  const nodes = new Map(file.trees.flatMap((tree) => tree.nodes.map((node) => [node.id, node] as const)));
  const lines: string[] = ['<?xml version="1.0" encoding="UTF-8"?>', `<graphml xmlns="${GRAPHML_NAMESPACE}">`];
  for (const [domain, keys] of [
    ["graph", GRAPH_KEYS],
    ["node", NODE_KEYS],
    ["edge", EDGE_KEYS],
  ] as const)
    for (const [name, type] of Object.entries(keys))
      lines.push(`  ${xmlTag("key", { id: `${domain}.${name}`, for: domain, "attr.name": name, "attr.type": type })}`);
  lines.push('  <graph id="chordae" edgedefault="undirected">');
  const { annotator, pass, created, radii, volume } = file;
  const about = { unit: "mm", frame: frameOf(file), specimen: volume?.name, annotator, pass, created, radii };
  lines.push(...dataLines("    ", "graph", GRAPH_KEYS, { ...about, volumeSha256: volume?.sha256 }));
  for (const tree of file.trees) {
    for (const node of tree.nodes) {
      const { position, id, ...labels } = node;
      const place = { x: position[0], y: position[1], z: position[2] };
      const own = {
        id: ids(id) === id ? undefined : id,
        tree: tree.id,
        treeName: tree.name,
        root: tree.root === id ? true : undefined,
      };
      lines.push(
        `    <node id="${ids(id)}">`,
        ...dataLines("      ", "node", NODE_KEYS, { ...labels, ...own, ...place }),
        "    </node>",
      );
    }
  }
  const edge = (line: FileLine, own: Readonly<Record<string, Value>>) => {
    const { points, radii: lineRadii, via, legs, madeBy, ...rest } = line as FileLine & { legs?: unknown };
    const id = ids(line.id) === line.id ? undefined : line.id;
    const data = {
      ...rest,
      ...own,
      id,
      points: json(points),
      radii: json(lineRadii),
      via: json(via),
      legs: json(legs),
      madeBy: json(madeBy),
    };
    lines.push(
      `    ${openTag("edge", { id: ids(line.id), source: ids(line.from), target: ids(line.to) })}`,
      ...dataLines("      ", "edge", EDGE_KEYS, data as Readonly<Record<string, Value>>),
      "    </edge>",
    );
  };
  for (const tree of file.trees) {
    for (const strand of tree.strands) {
      const { length, meanRadius } = measured.get(strand.id)!;
      edge(strand, { tree: tree.id, kind: "strand", length: roundMm(length), meanRadius: rounded(meanRadius) });
    }
  }
  for (const link of file.crossLinks ?? []) {
    const [from, to] = [nodes.get(link.from), nodes.get(link.to)];
    const { meanRadius } = radiusStatistics(centreline(link, from, to), link.radii);
    edge(link, { kind: "cross-link", length: roundMm(strandLength(link, from, to)), meanRadius: rounded(meanRadius) });
  }
  lines.push("  </graph>", "</graphml>");
  return `${lines.join("\n")}\n`;
}

/** What GraphML does not keep of this file, one sentence each. */
export function graphmlLosses(file: ChordaeFile): string[] {
  const has = holdingsOf(file);
  return sentences([
    [has.scan, "Of the scan only its name and hash are kept; its grid, voxel size and blur are not."],
    [has.specimen || has.protocol, "Facts of the specimen and the protocol are not kept."],
    [has.landmarks, "Landmarks are not kept."],
    [has.emptyTrees, "Trees without a node are not kept."],
    [has.unknown, "Keys of the tree file that this program does not know are not kept."],
  ]);
}

function dataLines(
  indent: string,
  domain: string,
  keys: Readonly<Record<string, GraphmlType>>,
  values: Readonly<Record<string, unknown>>,
): string[] {
  return Object.keys(keys).flatMap((name) => {
    const value = values[name] as Value;
    if (value === undefined || value === null) return [];
    return [`${indent}<data key="${domain}.${name}">${xmlText(String(value))}</data>`];
  });
}

function openTag(name: string, attributes: Readonly<Record<string, string>>): string {
  return `<${name}${Object.entries(attributes)
    .map(([key, value]) => ` ${key}="${xmlText(value)}"`)
    .join("")}>`;
}

function rounded(value: number | null): number | null {
  return value === null ? null : roundMm(value);
}

function json(value: unknown): string | undefined {
  return value === undefined ? undefined : JSON.stringify(value);
}

/** Ids that GraphML takes (name tokens); other ids of the file get a number of their own, which no file id has. */
function tokenIds(file: ChordaeFile): (id: string) => string {
  const all = [...file.trees.flatMap((tree) => [...tree.nodes, ...tree.strands]), ...(file.crossLinks ?? [])].map(({ id }) => id);
  const taken = new Set(all);
  const given = new Map<string, string>();
  let next = 1;
  for (const id of all) {
    if (/^[A-Za-z0-9._:-]+$/.test(id)) continue;
    while (taken.has(`id${next}`)) next += 1;
    given.set(id, `id${next}`);
    next += 1;
  }
  return (id) => given.get(id) ?? id;
}
