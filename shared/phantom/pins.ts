import type { ChordaeFile, FileStrand } from "#shared/formats/chordae/chordae-file.ts";
import { arcLengths } from "#shared/geometry/polyline.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, distance, scale } from "#shared/geometry/vec3.ts";
import type { Crossing } from "#shared/phantom/valve-trees.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** Pins a person would click: the nodes, and places along each strand a little beside its axis, never by 0.3 of its radius. */
export function pinsOf(truth: ChordaeFile, crossings: readonly Crossing[], seed: number): ChordaeFile {
  const random = new SeededRandom(seed, 300);
  const { crossLinks, ...rest } = truth;
  const pinned = (line: FileStrand): FileStrand => {
    const { points, radii, ...rest } = line;
    const near = crossings.filter((crossing) => crossing.strands.includes(line.id));
    const via = pinsAlong(points!, radii as readonly number[], near, random);
    return { ...(rest as FileStrand), ...(via.length > 0 && { via }) };
  };
  return {
    ...rest,
    annotator: "pins",
    pass: 1,
    trees: truth.trees.map((tree) => ({ ...tree, strands: tree.strands.map(pinned) })),
    ...(crossLinks && { crossLinks: crossLinks.map(pinned) }),
  };
}

function pinsAlong(
  points: readonly Vec3[],
  radii: readonly number[],
  crossings: readonly Crossing[],
  random: SeededRandom,
): Vec3[] {
  const at = arcLengths(points);
  const length = at.at(-1)!;
  const spacing = 3.5;
  const count = Math.floor(length / spacing);
  const places = Array.from({ length: count }, (_, k) => ((k + 1) * length) / (count + 1));
  for (const crossing of crossings) {
    // A person clicks close before and after a place where strings cross.
    const middle = at[nearestIndex(points, crossing.at)]!;
    for (const beside of [-0.5, 0.5]) if (middle + beside > 0.3 && middle + beside < length - 0.3) places.push(middle + beside);
  }
  places.sort((a, b) => a - b);
  const clicked = places.filter((s, k) => k === 0 || s - places[k - 1]! > 0.25);
  return clicked.map((s) => {
    const index = at.findIndex((value) => value >= s);
    const reach = 0.25 * radii[index]! * Math.cbrt(random.unit());
    const direction = [random.normal(), random.normal(), random.normal()] as const;
    const norm = Math.hypot(...direction) || 1;
    return roundPoint(add(points[index]!, scale(direction, reach / norm)));
  });
}

/** Index of the point nearest to a place; the first of several. */
export function nearestIndex(points: readonly Vec3[], at: Vec3): number {
  let best = 0;
  points.forEach((point, i) => {
    if (distance(point, at) < distance(points[best]!, at)) best = i;
  });
  return best;
}
