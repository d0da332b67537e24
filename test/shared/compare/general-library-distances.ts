import { spawnSync } from "node:child_process";
import type { CanonicalTree } from "#shared/compare/canonical.ts";

/** Distances by Debian's python3-networkx (graph_edit_distance, free origin), with CPU seconds; null distance = not ended in time. */
const PROGRAM = `
import json, math, sys, time
import networkx as nx
request = json.load(sys.stdin)
def graph(tree):
    g = nx.Graph()
    for k, node in enumerate(tree["nodes"]):
        g.add_node(k, type=node["type"], place=node["place"])
    for s in tree["strands"]:
        g.add_edge(s["from"], s["to"], length=s["length"])
    return g
answers = []
for (a, b), image in zip(request["pairs"], request["maps"]):
    scale = request["positionScale"]
    if scale is None:
        node = lambda p, q: 0 if p["type"] == q["type"] else 1
        edge = lambda p, q: 0
    else:
        node = lambda p, q: min(2, (0 if p["type"] == q["type"] else 1) + math.dist(p["place"], q["place"]) / scale)
        edge = lambda p, q: 0 if max(p["length"], q["length"]) == 0 else abs(p["length"] - q["length"]) / max(p["length"], q["length"])
    one = lambda attributes: 1
    start = time.process_time()
    d = nx.graph_edit_distance(graph(a), graph(b), node_subst_cost=node, node_del_cost=one, node_ins_cost=one, edge_subst_cost=edge, edge_del_cost=one, edge_ins_cost=one, timeout=request["timeout"])
    seconds = time.process_time() - start
    ends = lambda s: frozenset((s["from"], s["to"]))
    edges = {ends(s): s for s in b["strands"]}
    cost, used, kept = 0, set(), set()
    for k, j in enumerate(image):
        cost += 1 if j < 0 else node(a["nodes"][k], b["nodes"][j])
        used.add(j)
    cost += sum(1 for j in range(len(b["nodes"])) if j not in used)
    for s in a["strands"]:
        to = frozenset((image[s["from"]], image[s["to"]]))
        cost += edge(s, edges[to]) if to in edges else 1
        kept.add(to)
    cost += sum(1 for key in edges if key not in kept)
    answers.append({"distance": d, "seconds": seconds, "costOfMap": cost})
print(json.dumps({"version": nx.__version__, "answers": answers}))
`;

export interface LibraryAnswers {
  readonly version: string;
  /** `costOfMap`: what the given map costs by the definition, summed up in Python. */
  readonly answers: readonly { readonly distance: number | null; readonly seconds: number; readonly costOfMap: number }[];
}

/** Python programs to ask, Debian's own first: a Python from elsewhere does not see Debian's packages. */
const PYTHONS = ["/usr/bin/python3", "python3"];

/**
 * The library's distances, or why they cannot be had. Costs: `positionScale` null = structure, else geometry.
 * @param maps for each pair the image in B of each node of A, -1 = deleted.
 */
export function libraryDistances(
  pairs: readonly (readonly [CanonicalTree, CanonicalTree])[],
  maps: readonly Int32Array[],
  positionScale: number | null,
  timeoutSeconds: number,
): LibraryAnswers | string {
  const input = JSON.stringify({ pairs, maps: maps.map((map) => [...map]), positionScale, timeout: timeoutSeconds });
  for (const python of PYTHONS) {
    const run = spawnSync(python, ["-c", PROGRAM], { input, encoding: "utf8", maxBuffer: 1 << 26 });
    if (run.status === 0) return JSON.parse(run.stdout) as LibraryAnswers;
  }
  return "python3-networkx is not installed (Debian: apt-get install python3-networkx)";
}
