/** Type of a GraphML attribute that this program writes. */
export type GraphmlType = "string" | "double" | "int" | "boolean";

/** What a graph, its nodes and its edges carry besides ids; the lists are the format. Places and lengths in millimetres. */
export const GRAPH_KEYS = {
  unit: "string",
  frame: "string",
  specimen: "string",
  annotator: "string",
  pass: "int",
  created: "string",
  radii: "string",
  volumeSha256: "string",
} as const satisfies Record<string, GraphmlType>;

/** `id` stands only where the file's id cannot be an XML name token. */
export const NODE_KEYS = {
  id: "string",
  tree: "string",
  treeName: "string",
  root: "boolean",
  kind: "string",
  x: "double",
  y: "double",
  z: "double",
  certainty: "string",
  site: "string",
  muscle: "string",
  head: "int",
  leaflet: "string",
  segment: "string",
  zone: "string",
  cleft: "boolean",
} as const satisfies Record<string, GraphmlType>;

/** `points`, `radii`, `via`, `legs`, `madeBy`: JSON text as in the tree file. */
export const EDGE_KEYS = {
  id: "string",
  tree: "string",
  kind: "string",
  length: "double",
  meanRadius: "double",
  strut: "boolean",
  certainty: "string",
  points: "string",
  radii: "string",
  via: "string",
  legs: "string",
  madeBy: "string",
  imageFit: "double",
} as const satisfies Record<string, GraphmlType>;

/** XML namespace of GraphML. */
export const GRAPHML_NAMESPACE = "http://graphml.graphdrawing.org/xmlns";
