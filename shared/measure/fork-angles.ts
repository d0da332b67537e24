import { arcLengths, pointAt } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, dot, normalise, subtract } from "#shared/geometry/vec3.ts";

export interface ForkAngles {
  /** Degrees between the incoming strand's direction and the bisector of the two outgoing; null unless exactly two leave. */
  readonly straightnessAngle: number | null;
  /** Degrees between the two outgoing strands; null unless exactly two leave. */
  readonly branchingAngle: number | null;
}

/** A line that leaves the fork: its first point is the fork. */
export interface LeavingLine {
  readonly line: readonly Vec3[];
  readonly radii: readonly (number | null)[];
}

/** Local diameter assumed where a strand has no measured radius, millimetres. */
const UNMEASURED_DIAMETER_MM = 0.5;

/** Angles at a fork. @param incoming the strand towards the root, leaving the fork; null at a root. */
export function forkAngles(incoming: LeavingLine | null, outgoing: readonly LeavingLine[]): ForkAngles {
  if (outgoing.length !== 2) return { straightnessAngle: null, branchingAngle: null };
  const [first, second] = outgoing.map(directionFrom) as [Vec3, Vec3];
  const bisector = normalise(add(first, second));
  const branchingAngle = angle(first, second);
  if (!incoming || dot(bisector, bisector) === 0) return { straightnessAngle: null, branchingAngle };
  const back = directionFrom(incoming);
  return { straightnessAngle: angle([-back[0], -back[1], -back[2]], bisector), branchingAngle };
}

/** Direction of a line away from its first point, taken from one to three local diameters along it, or as far as it goes. */
function directionFrom({ line, radii }: LeavingLine): Vec3 {
  const radius = radii.find((r) => r !== null);
  const diameter = radius === undefined || radius === null ? UNMEASURED_DIAMETER_MM : 2 * radius;
  const total = arcLengths(line).at(-1) ?? 0;
  const near = total > diameter ? pointAt(line, diameter) : line[0]!;
  return normalise(subtract(pointAt(line, Math.min(total, 3 * diameter)), near));
}

function angle(a: Vec3, b: Vec3): number {
  return (Math.acos(Math.max(-1, Math.min(1, dot(a, b)))) * 180) / Math.PI;
}
