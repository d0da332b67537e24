import type { FileLine, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { type GraphEdge, type GraphNode, treesOfGraph } from "#shared/formats/graph-to-trees.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** Polylines as a file holds them; per line: numbers of its points, and what its cell data say. Millimetres. */
export interface PlainLines {
  /** shape [n, 3]. */
  readonly points: Float64Array;
  readonly lines: readonly (readonly number[])[];
  /** shape [n]; NaN = not known. */
  readonly radius: Float64Array | undefined;
  readonly tree: Float64Array | undefined;
  readonly strand: Float64Array | undefined;
  readonly crossLink: Float64Array | undefined;
}

interface Run {
  readonly points: readonly Vec3[];
  readonly radii: readonly (number | null)[] | undefined;
  readonly tree: number | undefined;
  readonly strand: number | undefined;
  readonly crossLink: boolean;
}

/**
 * Trees made of polylines: nodes where lines end, lines parted where another line of their tree ends on one of their points.
 * @param field texts of the file: ids and names that the numbers of `tree` and `strand` (from 1) point into.
 * @returns `parted`: lines that were parted.
 */
export function treesOfLines(
  pieces: readonly PlainLines[],
  field: ReadonlyMap<string, readonly string[]>,
): { trees: FileTree[]; crossLinks: FileLine[]; parted: number } {
  const runs = pieces.flatMap(runsOf).filter((run) => run.points.length >= 2);
  const ends = new Set(runs.flatMap((run) => [placeKey(run, 0), placeKey(run, run.points.length - 1)]));
  const ids = new Ids(field);
  const nodes = new Map<string, GraphNode>();
  const nodeAt = (run: Run, index: number): GraphNode => {
    const key = placeKey(run, index);
    // A cross-link ends at a node of any tree that has one there.
    const found = nodes.get(key) ?? (run.crossLink ? nodes.get(placesOnly(key, nodes)) : undefined);
    if (found) return found;
    const tree = run.tree === undefined ? undefined : ids.tree(run.tree);
    const name = run.tree === undefined ? undefined : field.get("treeNames")?.[run.tree - 1];
    const node: GraphNode = {
      id: ids.next("n"),
      position: run.points[index]!,
      ...(tree !== undefined && { tree }),
      ...(name && { treeName: name }),
    };
    nodes.set(key, node);
    return node;
  };
  let parted = 0;
  const edges: GraphEdge[] = [];
  for (const run of [...runs.filter((each) => !each.crossLink), ...runs.filter((each) => each.crossLink)]) {
    const cuts = run.points.flatMap((_, i) =>
      i === 0 || i === run.points.length - 1 || (!run.crossLink && ends.has(placeKey(run, i))) ? [i] : [],
    );
    if (cuts.length > 2) parted += 1;
    for (let k = 1; k < cuts.length; k++) {
      const [first, last] = [cuts[k - 1]!, cuts[k]!];
      const radii = run.radii?.slice(first, last + 1);
      edges.push({
        id: (cuts.length === 2 ? ids.strand(run.strand) : undefined) ?? ids.next(run.crossLink ? "x" : "s"),
        from: nodeAt(run, first).id,
        to: nodeAt(run, last).id,
        points: run.points.slice(first, last + 1),
        ...(radii && { radii }),
        crossLink: run.crossLink,
      });
    }
  }
  return { ...treesOfGraph([...nodes.values()], edges, false), parted };
}

function runsOf({ points, lines, radius, tree, strand, crossLink }: PlainLines): Run[] {
  return lines.map((line, i) => {
    const linked = crossLink?.[i] === 1;
    const own = line.map((k) => radius?.[k] ?? Number.NaN);
    return {
      points: line.map((k): Vec3 => [points[3 * k]!, points[3 * k + 1]!, points[3 * k + 2]!]),
      radii: own.every(Number.isNaN) ? undefined : own.map((r) => (Number.isNaN(r) ? null : r)),
      tree: linked ? undefined : tree?.[i],
      strand: strand?.[i],
      crossLink: linked,
    };
  });
}

/** A place inside a tree: lines of two trees that touch are not joined. */
function placeKey(run: Run, index: number): string {
  return `${run.tree ?? ""}|${run.points[index]!.join(" ")}`;
}

/** The key of a node at the same place in any tree; the key itself when there is none. */
function placesOnly(key: string, nodes: ReadonlyMap<string, GraphNode>): string {
  const place = key.slice(key.indexOf("|"));
  for (const known of nodes.keys()) if (known.endsWith(place)) return known;
  return key;
}

/** Ids from the file's lists, each once; new ones that none of them has. */
class Ids {
  private readonly used = new Set<string>();
  private readonly given = new Set<string>();
  private readonly count: Record<string, number> = {};

  constructor(private readonly field: ReadonlyMap<string, readonly string[]>) {
    for (const list of ["treeIds", "strandIds"]) for (const id of field.get(list) ?? []) this.used.add(id);
  }

  tree(number: number): string {
    return this.field.get("treeIds")?.[number - 1] || `tree ${number}`;
  }

  strand(number: number | undefined): string | undefined {
    const id = number === undefined ? undefined : this.field.get("strandIds")?.[number - 1];
    if (!id || this.given.has(id)) return undefined;
    this.given.add(id);
    return id;
  }

  next(letter: string): string {
    for (;;) {
      this.count[letter] = (this.count[letter] ?? 0) + 1;
      const id = `${letter}${this.count[letter]}`;
      if (!this.used.has(id)) return id;
    }
  }
}
