// What the robot reached and what it cost, against whoever clicks polylines.
import type { FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { nearestOnPolyline, polylineLength, resample } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import type { Effort } from "#test/tools/tracing-robot/effort.ts";
import { fewestVertices } from "#test/tools/tracing-robot/fewest-vertices.ts";

/** Curves are compared at so many places each. */
const PLACES = 120;

export interface RobotResult {
  readonly nodes: number;
  readonly effort: Effort;
  /** Distance of the true centrelines from what was drawn, millimetres: on average and at most. */
  readonly meanMm: number;
  readonly mostMm: number;
  /** The same the other way round: what was drawn from the true centrelines. */
  readonly strayMm: number;
  /** Fewest vertices of polylines with the same error, strand by strand; those on average, and those at most. */
  readonly verticesOnAverage: number;
  readonly verticesWithin: number;
  readonly forks: { readonly drawn: number; readonly true: number };
  readonly ends: { readonly drawn: number; readonly true: number };
}

export function resultOf(document: TreeDocument, trees: readonly FileTree[], effort: Effort): RobotResult {
  const drawn = [...document.strands.values()].map((strand) => polylineOf(document, strand));
  const away = (place: Vec3, lines: readonly (readonly Vec3[])[]) =>
    Math.min(...lines.map((line) => nearestOnPolyline(line, place).distance));
  let [sum, count, mostMm, onAverage, within] = [0, 0, 0, 0, 0];
  for (const tree of trees) {
    // Nodes are shared by the polylines of a tree.
    onAverage++;
    within++;
    for (const strand of tree.strands) {
      const length = strand.points!;
      const curve = resample(length, polylineLength(length) / PLACES);
      const distances = curve.map((place) => away(place, drawn));
      const reached = { meanMm: distances.reduce((a, b) => a + b) / distances.length, mostMm: Math.max(...distances) };
      const vertices = fewestVertices(curve, reached);
      onAverage += vertices.onAverage - 1;
      within += vertices.within - 1;
      sum += reached.meanMm * polylineLength(length);
      count += polylineLength(length);
      mostMm = Math.max(mostMm, reached.mostMm);
    }
  }
  const truth = trees.flatMap((tree) => tree.strands.map((strand) => strand.points!));
  const strayMm = Math.max(0, ...drawn.flatMap((line) => line.map((place) => away(place, truth))));
  const nodes = trees.flatMap((tree) => tree.nodes);
  const kinds = [...document.nodes.values()].map(({ kind }) => kind);
  const isEnd = (kind: string) => kind !== "fork" && kind !== "origin" && kind !== "waypoint";
  return {
    nodes: nodes.length,
    effort: { ...effort },
    meanMm: sum / count,
    mostMm,
    strayMm,
    verticesOnAverage: onAverage,
    verticesWithin: within,
    forks: { drawn: kinds.filter((kind) => kind === "fork").length, true: nodes.filter(({ kind }) => kind === "fork").length },
    ends: { drawn: kinds.filter(isEnd).length, true: nodes.filter(({ kind }) => isEnd(kind)).length },
  };
}
