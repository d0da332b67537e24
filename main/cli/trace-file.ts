import { setImmediate as nextTurn } from "node:timers/promises";
import { TautlineError } from "#shared/errors.ts";
import type { ChordaeFile, FileLine, FileStrand } from "#shared/formats/chordae/chordae-file.ts";
import { type PointMm, roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { measureRadii, solveStrand } from "#shared/tracing/solve-strand.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** What was done to one strand or cross-link. */
export interface TracedLine {
  readonly id: string;
  /** Millimetres along the stored points. */
  readonly length: number;
  /** Mean over the points that have a radius, millimetres; null when none has. */
  readonly meanRadius: number | null;
  readonly imageFit: number | null;
}

export interface TracedFile {
  readonly file: ChordaeFile;
  readonly strands: readonly TracedLine[];
  /** Ids of those written straight because the image could not be followed. */
  readonly failed: readonly string[];
}

/**
 * The file with its untraced lines traced and missing radii measured; everything else is the same object, unknown keys
 * included. Lets the process breathe between strands so that an interruption is seen.
 * @throws cancelled
 */
export async function traceFile(
  pins: ChordaeFile,
  pyramid: VoxelPyramid,
  parameters: TraceParameters,
  signal: AbortSignal,
  say: (line: string) => void,
): Promise<TracedFile> {
  const context = createTraceContext(pyramid, parameters.polarity);
  const places = new Map<string, Vec3>();
  for (const tree of pins.trees) for (const node of tree.nodes) places.set(node.id, node.position);
  const strands: TracedLine[] = [];
  const failed: string[] = [];
  let finishedRadii = false;

  const fill = async <L extends FileLine>(line: L): Promise<L> => {
    await nextTurn();
    if (signal.aborted) throw new TautlineError("cancelled", "Interrupted.", { what: "trace" });
    if (line.points && line.radii) {
      finishedRadii = true;
      return line;
    }
    if (line.points) {
      const radii = measureRadii(pyramid, Float64Array.from(line.points.flat()), parameters, context);
      const made = { ...line, radii: Array.from(radii, orNull) };
      strands.push(summary(made));
      return made;
    }
    const from = places.get(line.from)!;
    const to = places.get(line.to)!;
    const legs = (line as Partial<FileStrand>).legs;
    const request = {
      from: from as PointMm,
      to: to as PointMm,
      via: (line.via ?? []).map(roundPoint),
      ...(legs ? { legs } : {}),
    };
    const curve = solveStrand(pyramid, request, parameters, signal, context);
    const made = {
      ...line,
      points: Array.from(curve.radii, (_, i): Vec3 => [curve.points[3 * i]!, curve.points[3 * i + 1]!, curve.points[3 * i + 2]!]),
      radii: Array.from(curve.radii, orNull),
      madeBy: curve.madeBy,
      imageFit: curve.imageFit,
    };
    strands.push(summary(made));
    if (!curve.followed) {
      failed.push(line.id);
      say(`${line.id}: no string could be followed between its pins; written straight.`);
    }
    return made;
  };

  const trees = [];
  for (const tree of pins.trees) {
    const lines = [];
    for (const strand of tree.strands) lines.push(await fill(strand));
    trees.push({ ...tree, strands: lines });
  }
  const links = [];
  for (const link of pins.crossLinks ?? []) links.push(await fill(link));
  const radii = parameters.blurFwhmMm === null ? "raw" : "blur-corrected";
  if (finishedRadii && pins.radii !== undefined && pins.radii !== radii && strands.length > 0)
    say(`the file's finished strands have ${pins.radii} radii, the new ones are ${radii}.`);
  const file: ChordaeFile = {
    ...pins,
    ...(finishedRadii || strands.length === 0 ? {} : { radii }),
    trees,
    ...(pins.crossLinks ? { crossLinks: links } : {}),
  };
  return { file, strands, failed };
}

function orNull(radius: number): number | null {
  return Number.isFinite(radius) ? radius : null;
}

function summary(line: FileLine): TracedLine {
  const points = line.points!;
  let length = 0;
  for (let i = 1; i < points.length; i++) length += distance(points[i - 1]!, points[i]!);
  const known = line.radii!.filter((radius): radius is number => radius !== null);
  const meanRadius = known.length > 0 ? roundMm(known.reduce((sum, radius) => sum + radius, 0) / known.length) : null;
  return { id: line.id, length: roundMm(length), meanRadius, imageFit: line.imageFit ?? null };
}
