import type { UnknownKeys } from "#shared/trees/document.ts";

/** Keys of each object of the file, in the order in which they are written; every other key is unknown and kept. */
export const KNOWN_KEYS = {
  header: ["format", "version", "unit", "frame", "volume", "specimen", "protocol", "annotator", "pass", "created", "software"],
  tree: ["id", "name", "root", "nodes", "strands"],
  node: ["id", "kind", "site", "muscle", "head", "position", "certainty", "leaflet", "segment", "zone", "cleft"],
  strand: ["id", "from", "to", "strut", "certainty", "points", "radii", "via", "legs", "madeBy", "imageFit"],
  crossLink: ["id", "from", "to", "certainty", "points", "radii", "via", "madeBy", "imageFit"],
  landmarks: ["annulus", "freeEdges", "commissures", "muscleHeads"],
} as const;

/** The keys of `object` that are not in `known`, as a new object; undefined when there are none. */
export function unknownKeys(object: Readonly<Record<string, unknown>>, known: readonly string[]): UnknownKeys | undefined {
  const rest = Object.entries(object).filter(([key]) => !known.includes(key));
  return rest.length === 0 ? undefined : Object.fromEntries(rest);
}

/** The entries whose value is there, as a new object in their order: what JSON would write. */
export function present<T extends Readonly<Record<string, unknown>>>(entries: T): T {
  return Object.fromEntries(Object.entries(entries).filter(([, value]) => value !== undefined)) as T;
}
