import type { Intent, LeavePlace } from "#renderer/editor/session/intent.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import type { UnderWay } from "#renderer/editor/tracing/under-way.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { roundPoint } from "#shared/geometry/types.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { LegKind, NodeId, TreeDocument } from "#shared/trees/document.ts";
import { outwardRun } from "#shared/trees/edits/extend-strand.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { isLooseEnd } from "#shared/trees/edits/rewiring.ts";

/** What will be under way once everything that waits is carried out: what the screen shows and the guide starts from. */
export interface Projection {
  readonly kind: UnderWay["kind"];
  /** Pins of the strand or cross-link under way, the first one where it starts. */
  readonly pins: readonly PointMm[];
  /** So many of them are in the document already; the rest waits. */
  readonly settled: number;
  readonly leg: LegKind;
}

const NONE: Projection = { kind: "nothing", pins: [], settled: 0, leg: "guide" };

/** The projection of what is under way over the waiting intents. Places still to be snapped count where they were aimed. */
export function project(document: TreeDocument, underWay: UnderWay, waiting: readonly Intent[]): Projection {
  return waiting.reduce((projection, intent) => after(document, projection, intent), now(document, underWay));
}

/** The place that the next pin is joined to. */
export function tipOf(projection: Projection): PointMm | null {
  return projection.pins.at(-1) ?? null;
}

function now(document: TreeDocument, underWay: UnderWay): Projection {
  switch (underWay.kind) {
    case "nothing":
      return NONE;
    case "strand": {
      const pins = pinsTo(document, underWay.tip);
      return pins.length === 0 ? NONE : { kind: "strand", pins, settled: pins.length, leg: underWay.leg };
    }
    case "branch":
      return { kind: "branch", pins: [underWay.point], settled: 1, leg: underWay.leg };
    case "link":
      return { kind: "link", pins: [underWay.point, ...underWay.via], settled: 1 + underWay.via.length, leg: "guide" };
  }
}

function after(document: TreeDocument, before: Projection, intent: Intent): Projection {
  switch (intent.do) {
    case "pin": {
      const kind = before.kind === "link" ? "link" : "strand";
      return { kind, pins: [...before.pins, placeOf(intent.at)], settled: before.settled, leg: "guide" };
    }
    case "end":
    case "leave":
    case "jump":
      return NONE;
    case "branch":
      return startAt(document, intent.from, "branch");
    case "link":
      return before.kind === "link" ? NONE : startAt(document, intent.to, "link");
    case "resume": {
      const pins = pinsTo(document, intent.node);
      return pins.length === 0 ? NONE : { kind: "strand", pins, settled: pins.length, leg: "guide" };
    }
    case "straight":
      return before.kind === "strand" || before.kind === "branch"
        ? { ...before, leg: before.leg === "guide" ? "straight" : "guide" }
        : before;
    case "back": {
      const pins = before.pins.slice(0, -1);
      return pins.length === 0 ? NONE : { ...before, pins, settled: Math.min(before.settled, pins.length), leg: "guide" };
    }
    default:
      return before;
  }
}

function startAt(document: TreeDocument, anchor: LeavePlace, kind: "branch" | "link"): Projection {
  if ("passing" in anchor) return { kind, pins: [roundPoint(anchor.passing.at)], settled: 1, leg: "guide" };
  if ("node" in anchor) {
    const node = document.nodes.get(anchor.node);
    if (node === undefined) return NONE;
    if (kind === "branch") {
      const pins = pinsTo(document, anchor.node);
      return { kind: "strand", pins, settled: pins.length, leg: "guide" };
    }
    return { kind, pins: [node.position], settled: 1, leg: "guide" };
  }
  const strand = document.strands.get(anchor.strand);
  const point = strand === undefined ? roundPoint(anchor.near) : placeOnLine(document, strand, anchor.near).point;
  return { kind, pins: [point], settled: 1, leg: "guide" };
}

/** Pins of the strand that ends at a node, in order to it; the node alone when a new strand would start there. */
function pinsTo(document: TreeDocument, tip: NodeId): PointMm[] {
  const node = document.nodes.get(tip);
  if (node === undefined) return [];
  const strand = isLooseEnd(document, node) ? strandsAt(document, tip)[0] : undefined;
  if (strand === undefined) return [node.position];
  const start = document.nodes.get(strand.from === tip ? strand.to : strand.from)!;
  return [start.position, ...outwardRun(strand, tip).via, node.position];
}

function placeOf(place: IntentPlace): PointMm {
  return roundPoint("point" in place ? place.point : place.aim.at);
}
