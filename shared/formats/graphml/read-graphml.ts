import { unreadable } from "#shared/errors.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { CHORDAE_FORMAT, CHORDAE_VERSION, type ChordaeFile, type ChordaeHeader } from "#shared/formats/chordae/chordae-file.ts";
import { present } from "#shared/formats/chordae/known-keys.ts";
import { type GraphEdge, type GraphNode, treesOfGraph } from "#shared/formats/graph-to-trees.ts";
import type { ReadTwin } from "#shared/formats/read-twin.ts";
import { childElements, readXml, textOf, type XmlElement } from "#shared/formats/xml/read-xml.ts";
import { NODE_KINDS } from "#shared/trees/document.ts";

type Data = ReadonlyMap<string, string>;

/**
 * The trees in a GraphML text: any whose nodes carry x, y and z (in any case of letters). Node and edge attributes of this
 * program's own files are taken over; others are left out. Without a word on the unit, places are taken as millimetres.
 * @throws unreadable-input for XML that is not GraphML, more than one graph, nodes without a place, edges to nowhere, or
 *   attributes that do not make a valid tree file.
 */
export function readGraphml(text: string, fileName: string): ReadTwin {
  const root = readXml(text, fileName);
  if (root.name !== "graphml") throw unreadable(fileName, "a <graphml> element", `<${root.name}>`);
  const graphs = childElements(root, "graph");
  if (graphs.length !== 1) throw unreadable(fileName, "one <graph>", `${graphs.length}`);
  const graph = graphs[0]!;
  const keys = new Map(childElements(root, "key").map((key) => [key.attributes.id ?? "", key]));
  const dataOf = (element: XmlElement, domain: string): Data => dataMap(element, domain, keys);
  const notes: string[] = [];
  const about = dataOf(graph, "graph");
  const unit = about.get("unit");
  if (unit !== undefined && unit !== "mm")
    throw unreadable(fileName, "unit mm", unit, "graph", "Convert the lengths to millimetres first.");
  if (unit === undefined) notes.push("The file names no unit; its places were taken as millimetres.");
  for (const unread of ["hyperedge", "port"])
    if (childElements(graph, unread).length > 0) notes.push(`Elements <${unread}> were left out.`);

  const names = new Map<string, string>();
  const nodes = childElements(graph, "node").map((element): GraphNode => {
    const id = needId(element, "node", fileName);
    const data = dataOf(element, "node");
    names.set(id, data.get("id") ?? id);
    if (childElements(element, "graph").length > 0) throw unreadable(fileName, "no graph inside a node", "one", `node ${id}`);
    return graphNode(names.get(id)!, data, fileName);
  });
  const endOf = (edge: XmlElement, end: "source" | "target", index: number): string => {
    const id = edge.attributes[end];
    const name = id === undefined ? undefined : names.get(id);
    if (name === undefined) throw unreadable(fileName, "the id of a node", id ?? "nothing", `edge ${index + 1}, ${end}`);
    return name;
  };
  const taken = new Set([...names.values(), ...nodes.flatMap((node) => node.tree ?? [])]);
  const edgeIds = childElements(graph, "edge").flatMap((edge) => edge.attributes.id ?? []);
  for (const id of edgeIds) taken.add(id);
  let next = 1;
  const newId = () => {
    while (taken.has(`s${next}`)) next += 1;
    taken.add(`s${next}`);
    return `s${next}`;
  };
  const edges = childElements(graph, "edge").map((element, index): GraphEdge => {
    const data = dataOf(element, "edge");
    const id = data.get("id") ?? element.attributes.id ?? newId();
    return graphEdge(id, endOf(element, "source", index), endOf(element, "target", index), data, fileName);
  });
  const directed = graph.attributes.edgedefault === "directed";
  if (nodes.some((node) => node.kind === undefined))
    notes.push("Nodes without a kind were given one by their degree; ends are open until somebody says what they are.");
  const { trees, crossLinks } = treesOfGraph(nodes, edges, directed);
  const file = { ...headerOf(about), trees, ...(crossLinks.length > 0 && { crossLinks }) };
  return { file: checkChordaeFile(file, fileName), notes };
}

function headerOf(about: Data): Pick<ChordaeFile, "format" | "version" | "unit"> & ChordaeHeader {
  const name = about.get("specimen");
  const sha256 = about.get("volumeSha256");
  const pass = about.get("pass");
  return present({
    format: CHORDAE_FORMAT,
    version: CHORDAE_VERSION,
    unit: "mm",
    frame: about.get("frame"),
    volume: name === undefined && sha256 === undefined ? undefined : present({ name, sha256 }),
    annotator: about.get("annotator"),
    pass: pass === undefined ? undefined : Number(pass),
    created: about.get("created"),
    radii: about.get("radii"),
  }) as Pick<ChordaeFile, "format" | "version" | "unit"> & ChordaeHeader;
}

/** Attribute values of an element by name, defaults included; places also under the lower-case name. */
function dataMap(element: XmlElement, domain: string, keys: ReadonlyMap<string, XmlElement>): Data {
  const map = new Map<string, string>();
  const nameOf = (key: XmlElement) => key.attributes["attr.name"] ?? key.attributes.id ?? "";
  const put = (name: string, value: string) => map.set(/^[XYZ]$/.test(name) ? name.toLowerCase() : name, value);
  for (const key of keys.values()) {
    const [fallback] = childElements(key, "default");
    if (fallback && [domain, "all"].includes(key.attributes.for ?? "all")) put(nameOf(key), textOf(fallback));
  }
  for (const data of childElements(element, "data")) {
    const key = keys.get(data.attributes.key ?? "");
    put(key ? nameOf(key) : (data.attributes.key ?? ""), textOf(data));
  }
  return map;
}

function graphNode(id: string, data: Data, fileName: string): GraphNode {
  const [x, y, z] = (["x", "y", "z"] as const).map((axis) => {
    const value = data.get(axis);
    if (value === undefined) throw unreadable(fileName, `a value for ${axis}`, "none", `node ${id}`);
    return numberOf(value, fileName, `node ${id}, ${axis}`);
  }) as [number, number, number];
  const head = data.get("head");
  return present({
    id,
    tree: data.get("tree"),
    treeName: data.get("treeName"),
    root: data.get("root") === "true",
    // Another program's kinds mean something else; what they are is then seen from the degree.
    kind: (NODE_KINDS as readonly (string | undefined)[]).includes(data.get("kind")) ? data.get("kind") : undefined,
    site: data.get("site"),
    muscle: data.get("muscle"),
    head: head === undefined ? undefined : numberOf(head, fileName, `node ${id}, head`),
    position: [x, y, z],
    certainty: data.get("certainty"),
    leaflet: data.get("leaflet"),
    segment: data.get("segment"),
    zone: data.get("zone"),
    cleft: booleanOf(data.get("cleft")),
  }) as unknown as GraphNode;
}

function graphEdge(id: string, from: string, to: string, data: Data, fileName: string): GraphEdge {
  const json = (name: string): unknown => {
    const value = data.get(name);
    if (value === undefined) return undefined;
    try {
      return JSON.parse(value);
    } catch {
      throw unreadable(fileName, "JSON text", value.slice(0, 60), `edge ${id}, ${name}`);
    }
  };
  const imageFit = data.get("imageFit");
  return present({
    id,
    from,
    to,
    tree: data.get("tree"),
    crossLink: data.get("kind") === "cross-link",
    strut: booleanOf(data.get("strut")),
    certainty: data.get("certainty"),
    points: json("points"),
    radii: json("radii"),
    via: json("via"),
    legs: json("legs"),
    madeBy: json("madeBy"),
    imageFit: imageFit === undefined ? undefined : numberOf(imageFit, fileName, `edge ${id}, imageFit`),
  }) as unknown as GraphEdge;
}

function needId(element: XmlElement, what: string, fileName: string): string {
  const { id } = element.attributes;
  if (id === undefined || id === "") throw unreadable(fileName, `an id on every ${what}`, "none", what);
  return id;
}

function numberOf(text: string, fileName: string, where: string): number {
  const value = text.trim() === "" ? Number.NaN : Number(text);
  if (!Number.isFinite(value)) throw unreadable(fileName, "a finite number", `'${text.slice(0, 40)}'`, where);
  return value;
}

function booleanOf(text: string | undefined): boolean | undefined {
  return text === undefined ? undefined : /^(true|1)$/i.test(text.trim());
}
