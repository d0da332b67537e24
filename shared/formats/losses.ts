import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { KNOWN_KEYS, unknownKeys } from "#shared/formats/chordae/known-keys.ts";

/** What a file holds that other formats may have no place for. */
export interface Holdings {
  readonly scan: boolean;
  readonly specimen: boolean;
  readonly protocol: boolean;
  readonly landmarks: boolean;
  readonly pins: boolean;
  readonly provenance: boolean;
  readonly labels: boolean;
  readonly radiiBelowResolution: boolean;
  readonly crossLinks: boolean;
  readonly unknown: boolean;
  readonly emptyTrees: boolean;
  readonly untraced: boolean;
}

const OTHER_HEADER_KEYS = ["radii", "trees", "crossLinks", "landmarks"] as const;

/** What of the tree file's extras this file makes use of; the base for saying what a conversion loses. */
export function holdingsOf(file: ChordaeFile): Holdings {
  const strands = file.trees.flatMap((tree) => tree.strands);
  const lines = [...strands, ...(file.crossLinks ?? [])];
  const nodes = file.trees.flatMap((tree) => tree.nodes);
  const unknown =
    unknownKeys(file, [...KNOWN_KEYS.header, ...OTHER_HEADER_KEYS]) ??
    file.trees.map((tree) => unknownKeys(tree, KNOWN_KEYS.tree)).find(Boolean) ??
    nodes.map((node) => unknownKeys(node, KNOWN_KEYS.node)).find(Boolean) ??
    strands.map((strand) => unknownKeys(strand, KNOWN_KEYS.strand)).find(Boolean) ??
    file.crossLinks?.map((link) => unknownKeys(link, KNOWN_KEYS.crossLink)).find(Boolean);
  return {
    scan: file.volume !== undefined && file.volume !== null,
    specimen: file.specimen !== undefined && file.specimen !== null,
    protocol: file.protocol !== undefined && file.protocol !== null,
    landmarks: file.landmarks !== undefined,
    pins: lines.some((line) => (line.via?.length ?? 0) > 0),
    provenance: lines.some((line) => line.madeBy !== undefined || (line.imageFit ?? null) !== null),
    labels: nodes.some((node) => node.leaflet !== undefined || node.site !== undefined || node.certainty !== undefined),
    radiiBelowResolution: lines.some((line) => line.radii?.includes(null)),
    crossLinks: (file.crossLinks?.length ?? 0) > 0,
    unknown: unknown !== undefined,
    emptyTrees: file.trees.some((tree) => tree.nodes.length === 0),
    untraced: lines.some((line) => line.points === undefined),
  };
}

/** The sentences whose condition holds. */
export function sentences(pairs: readonly (readonly [boolean, string])[]): string[] {
  return pairs.filter(([holds]) => holds).map(([, sentence]) => sentence);
}
