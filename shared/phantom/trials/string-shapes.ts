import type { Vec3 } from "#shared/geometry/types.ts";
import { add, dot, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

/** How a string bends on its way. */
export interface Bend {
  /** Height of its bow over the straight line, millimetres. */
  readonly sagMm: number;
  /** Height of a sideways wave, one and a half turns, millimetres. */
  readonly waveMm: number;
}

/** Points between those of a bent line, millimetres. */
export type Line = readonly Vec3[];

/**
 * A string along a direction through a middle, bowed and waved to sides drawn by chance; points about `stepMm` apart.
 * @param along need not be of unit length.
 */
export function bentLine(middle: Vec3, along: Vec3, lengthMm: number, bend: Bend, stepMm: number, random: SeededRandom): Line {
  const direction = normalise(along);
  const [u, v] = perpendicularFrame(direction);
  const turn = random.between(0, 2 * Math.PI);
  const bow = add(scale(u, Math.cos(turn)), scale(v, Math.sin(turn)));
  const side = add(scale(u, -Math.sin(turn)), scale(v, Math.cos(turn)));
  const phase = random.between(-0.3, 0.3);
  const count = Math.max(2, Math.ceil(lengthMm / stepMm));
  return Array.from({ length: count + 1 }, (_, i) => {
    const t = i / count;
    const height = bend.sagMm * (Math.sin(Math.PI * t) - 0.5);
    const wave = bend.waveMm * Math.sin(3 * Math.PI * (t - 0.5) + phase);
    return add(middle, add(scale(direction, lengthMm * (t - 0.5)), add(scale(bow, height), scale(side, wave))));
  });
}

/** The line moved sideways by a distance, everywhere across itself: its neighbour at constant distance. @param towards which side. */
export function besideLine(line: Line, towards: Vec3, distanceMm: number): Line {
  return line.map((point, i) => {
    const tangent = normalise(subtract(line[Math.min(line.length - 1, i + 1)]!, line[Math.max(0, i - 1)]!));
    const side = normalise(subtract(towards, scale(tangent, dot(towards, tangent))));
    return add(point, scale(side, distanceMm));
  });
}

/** A direction near one of the axes: along x, turned by up to `most` radians. */
export function nearX(most: number, random: SeededRandom): Vec3 {
  const angle = random.between(0, 2 * Math.PI);
  const tilt = Math.tan(most * Math.sqrt(random.unit()));
  return normalise([1, tilt * Math.cos(angle), tilt * Math.sin(angle)]);
}

/** A direction of any kind, or across `axis` when given. */
export function anySide(random: SeededRandom, axis?: Vec3): Vec3 {
  const free = normalise([random.normal(), random.normal(), random.normal()]);
  return axis ? normalise(subtract(free, scale(axis, dot(free, axis)))) : free;
}

/** A line from one place to another that leaves and arrives in given directions. @source cubic Hermite interpolation. */
export function joiningLine(from: Vec3, leave: Vec3, to: Vec3, arrive: Vec3, stepMm: number): Line {
  const span = subtract(to, from);
  const length = Math.hypot(...span);
  const a = scale(normalise(leave), length);
  const b = scale(normalise(arrive), length);
  const count = Math.max(2, Math.ceil(length / stepMm));
  return Array.from({ length: count + 1 }, (_, i) => {
    const t = i / count;
    const [h0, h1, h2, h3] = [2 * t ** 3 - 3 * t ** 2 + 1, t ** 3 - 2 * t ** 2 + t, 3 * t ** 2 - 2 * t ** 3, t ** 3 - t ** 2];
    return add(add(scale(from, h0), scale(a, h1)), add(scale(to, h2), scale(b, h3)));
  });
}
