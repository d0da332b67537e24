import type { Leaflet, Muscle, NodeKind, OriginSite, Segment, TreeDocument, Zone } from "#shared/trees/document.ts";
import type { NodeLabels } from "#shared/trees/edits/node-labels.ts";

/** Labels that stay chosen from one string to the next, so that a bundle is labelled once. */
export interface Sticky {
  readonly site: OriginSite;
  readonly muscle: Muscle | null;
  readonly head: number | null;
  readonly leaflet: Leaflet | null;
  readonly segment: Segment | null;
  readonly zone: Zone | null;
}

export const FIRST_STICKY: Sticky = { site: "head", muscle: null, head: null, leaflet: null, segment: null, zone: null };

const LEAFLET_OF_SEGMENT: Readonly<Record<Segment, Leaflet>> = {
  A1: "anterior",
  A2: "anterior",
  A3: "anterior",
  P1: "posterior",
  P2: "posterior",
  P3: "posterior",
  AC: "commissure",
  PC: "commissure",
};

/** The leaflet that a segment belongs to. */
export function leafletOf(segment: Segment): Leaflet {
  return LEAFLET_OF_SEGMENT[segment];
}

/** Sticky labels after labels were set by hand; a segment of another leaflet does not outlive its leaflet. */
export function afterLabelling(sticky: Sticky, labels: NodeLabels): Sticky {
  const next: Sticky = {
    site: labels.site ?? sticky.site,
    muscle: labels.muscle === undefined ? sticky.muscle : labels.muscle,
    head: labels.head === undefined ? sticky.head : labels.head,
    leaflet: labels.leaflet === undefined ? sticky.leaflet : labels.leaflet,
    segment: labels.segment === undefined ? sticky.segment : labels.segment,
    zone: labels.zone === undefined ? sticky.zone : labels.zone,
  };
  if (labels.segment) return { ...next, leaflet: leafletOf(labels.segment) };
  if (next.segment !== null && next.leaflet !== leafletOf(next.segment)) return { ...next, segment: null };
  return next;
}

/** Sticky labels for the end of a strand: only where nothing is inherited from the nodes above it. */
export function stickyEndLabels(sticky: Sticky, kind: NodeKind, inherited: NodeLabels): NodeLabels {
  if (kind !== "insertion") return {};
  const labels: { -readonly [K in "leaflet" | "segment" | "zone"]?: NodeLabels[K] } = {};
  const leaflet = inherited.leaflet ?? sticky.leaflet;
  if (inherited.leaflet === undefined && sticky.leaflet !== null) labels.leaflet = sticky.leaflet;
  if (inherited.segment === undefined && sticky.segment !== null && leafletOf(sticky.segment) === leaflet) {
    labels.segment = sticky.segment;
  }
  if (inherited.zone === undefined && sticky.zone !== null) labels.zone = sticky.zone;
  return labels;
}

/** Sticky labels as a document shows them: those of its newest origin and newest insertion; for a pass opened again. */
export function stickyOf(document: TreeDocument): Sticky {
  let sticky = FIRST_STICKY;
  for (const node of document.nodes.values()) {
    if (node.kind === "origin") {
      sticky = { ...sticky, site: node.site ?? "head", muscle: node.muscle ?? null, head: node.head ?? null };
    } else if (node.kind === "insertion") {
      sticky = { ...sticky, leaflet: node.leaflet ?? null, segment: node.segment ?? null, zone: node.zone ?? null };
    }
  }
  return sticky;
}
