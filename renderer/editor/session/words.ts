import type { EndKind, NodeKind, TreeDocument, TreeId } from "#shared/trees/document.ts";

/** Node kinds as sentences say them. */
export const KIND_WORDS: Readonly<Record<NodeKind, string>> = {
  origin: "origin",
  fork: "fork",
  waypoint: "waypoint",
  insertion: "insertion",
  "muscle-end": "muscle end",
  "wall-end": "wall end",
  ruptured: "ruptured end",
  cut: "cut end",
  "lost-end": "lost end",
  "scan-edge": "end at the scan's edge",
  open: "open end",
};

/** The end kinds a key can say, as the keys' help words them. */
export const END_WORDS: Readonly<Record<Exclude<EndKind, "open">, string>> = {
  insertion: "insertion",
  ruptured: "ruptured",
  cut: "cut",
  "lost-end": "lost",
  "muscle-end": "muscle",
  "wall-end": "wall",
  "scan-edge": "scan edge",
};

/** A tree's name, or its id when it has gone. */
export function treeName(document: TreeDocument, id: TreeId): string {
  return document.trees.get(id)?.name ?? id;
}

/** A length with its unit: 14.2 mm. */
export function mmText(mm: number, digits = 1): string {
  return `${mm.toFixed(digits)} mm`;
}

/** "1 204": thousands set apart by a narrow space. */
export function countText(count: number): string {
  return String(count).replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f");
}

/** "3 strands", "1 strand". */
export function countOf(count: number, noun: string): string {
  return `${countText(count)} ${noun}${count === 1 ? "" : "s"}`;
}
