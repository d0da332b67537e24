import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import type { CurveBody, LogRecord } from "#shared/log/records.ts";
import { type TurnedFrame, trueFromShown } from "#shared/study/turn.ts";
import type { CrossLink, Landmarks, Strand, TreeNode } from "#shared/trees/document.ts";
import type { Change } from "#shared/trees/operations.ts";

/**
 * A record of a log drawn in a turned frame, with every place in the true frame; everything else stays, `prev` included (who
 * writes the new log chains it anew). The same place always goes to the same place, so a log that holds together still does.
 */
export function recordInTrueFrame(record: LogRecord, frame: TurnedFrame): LogRecord {
  switch (record.kind) {
    case "op":
      return { ...record, body: { ...record.body, changes: record.body.changes.map((change) => trueChange(change, frame)) } };
    case "curve":
      return { ...record, body: trueCurve(record.body, frame) };
    case "header":
    case "at":
    case "mark":
    case "session":
      return record;
  }
}

function trueChange(change: Change, frame: TurnedFrame): Change {
  switch (change.table) {
    case "node":
      return { ...change, from: change.from && trueNode(change.from, frame), to: change.to && trueNode(change.to, frame) };
    case "strand":
      return { ...change, from: change.from && truePins(change.from, frame), to: change.to && truePins(change.to, frame) };
    case "cross-link":
      return { ...change, from: change.from && truePins(change.from, frame), to: change.to && truePins(change.to, frame) };
    case "landmarks":
      return { ...change, from: trueLandmarks(change.from, frame), to: trueLandmarks(change.to, frame) };
    case "tree":
    case "dismissal":
      return change;
  }
}

function trueNode(node: TreeNode, frame: TurnedFrame): TreeNode {
  return { ...node, position: trueFromShown(frame, node.position) };
}

function truePins<T extends Strand | CrossLink>(line: T, frame: TurnedFrame): T {
  return { ...line, via: places(line.via, frame) };
}

function trueLandmarks(landmarks: Landmarks, frame: TurnedFrame): Landmarks {
  const { annulus, freeEdges, commissures, muscleHeads } = landmarks;
  return {
    ...landmarks,
    ...(annulus && { annulus: { ...annulus, points: places(annulus.points, frame) } }),
    ...(freeEdges && { freeEdges: freeEdges.map((edge) => places(edge, frame)) }),
    ...(commissures && { commissures: places(commissures, frame) }),
    ...(muscleHeads && {
      muscleHeads: muscleHeads.map((head) => ({ ...head, position: trueFromShown(frame, head.position) })),
    }),
  };
}

function trueCurve(curve: CurveBody, frame: TurnedFrame): CurveBody {
  const points: number[] = [];
  for (let k = 0; k + 2 < curve.points.length; k += 3)
    points.push(...trueFromShown(frame, [curve.points[k]!, curve.points[k + 1]!, curve.points[k + 2]!]));
  return { ...curve, points };
}

function places(list: readonly Vec3[], frame: TurnedFrame): PointMm[] {
  return list.map((place) => trueFromShown(frame, place));
}
