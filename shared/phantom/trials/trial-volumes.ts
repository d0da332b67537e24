import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, normalise, scale } from "#shared/geometry/vec3.ts";
import { anySide, type Bend, bentLine, besideLine, joiningLine, type Line, nearX } from "#shared/phantom/trials/string-shapes.ts";
import type { TrialBody, TrialLook, TrialSpec, TrialString } from "#shared/phantom/trials/trial-spec.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

/** What a trial volume can be judged on. */
export type TrialTopic =
  /** Diameter 3 voxels and up, contrast-to-noise 5 and up, no neighbour that touches. */
  "plain" | "touching" | "below-resolution" | "low-contrast" | "thick" | "rim" | "fork";

/** A kind of trial volume; a seed makes it a volume. */
export interface TrialVolume {
  readonly name: string;
  /** What it shows, one sentence. */
  readonly about: string;
  readonly topic: TrialTopic;
  /** Marked as hard: strings that even a person has to look at twice. */
  readonly hard: boolean;
  readonly spec: (random: SeededRandom) => TrialSpec;
}

const SIZE = [96, 60, 60] as const;
const FINE = 0.04;
/** Blur widths of the imaging chain in voxels, as of a good scan. */
const BLUR_VOXELS = 1.75;

interface Frame {
  readonly size: readonly [number, number, number];
  readonly spacing: readonly [number, number, number];
  /** Middle of the volume. */
  readonly middle: Vec3;
  /** Finest spacing. */
  readonly voxel: number;
  readonly look: TrialLook;
}

function frame(
  voxel: number,
  look: Partial<TrialLook> = {},
  size: readonly [number, number, number] = SIZE,
  stretchZ = 1,
): Frame {
  const spacing = [voxel, voxel, voxel * stretchZ] as const;
  const middle = size.map((side, axis) => ((side - 1) / 2) * spacing[axis]!) as unknown as Vec3;
  const plain: TrialLook = { polarity: "bright", blurFwhmMm: BLUR_VOXELS * voxel, contrastToNoise: 5 };
  return { size, spacing, middle, voxel, look: { ...plain, ...look } };
}

function volume({ size, spacing, look }: Frame, strings: readonly TrialString[], bodies: readonly TrialBody[] = []): TrialSpec {
  return { sizeVoxels: size, spacingMm: spacing, strings, bodies, look };
}

function string(name: string, line: Line, diameter: number, end = diameter): TrialString {
  return { from: `${name} below`, to: `${name} above`, line, diametersMm: [diameter, end] };
}

/** A string through the middle, about 80 voxels long; sizes in voxels. */
function lineIn(f: Frame, random: SeededRandom, bend: Bend, length = 80): Line {
  const bent = { sagMm: bend.sagMm * f.voxel, waveMm: bend.waveMm * f.voxel };
  return bentLine(f.middle, nearX(0.15, random), length * f.voxel, bent, f.voxel, random);
}

const STRAIGHT: Bend = { sagMm: 0, waveMm: 0 };
const BOWED: Bend = { sagMm: 14, waveMm: 1.5 };

/** Two strings side by side at constant distance; `gap` and diameters in voxels. */
function pair(voxel: number, bend: Bend, gap: number, diameters: readonly [number, number]) {
  return (random: SeededRandom): TrialSpec => {
    const f = frame(voxel);
    const one = lineIn(f, random, bend);
    const apart = ((diameters[0] + diameters[1]) / 2 + gap) * voxel;
    const other = besideLine(one, anySide(random, [1, 0, 0]), apart);
    return volume(f, [string("one", one, diameters[0] * voxel), string("other", other, diameters[1] * voxel)]);
  };
}

function one(f: Frame, bend: Bend, diameter: number, end = diameter, length = 80) {
  return (random: SeededRandom) => volume(f, [string("one", lineIn(f, random, bend, length), diameter * f.voxel, end * f.voxel)]);
}

/** A thick string that leaves a volume cropped about it at both ends. Two thirds of the volume are background. */
function strut(voxel: number, diameterMm: number) {
  return (random: SeededRandom): TrialSpec => {
    const lengthMm = 2.3 * diameterMm;
    const across = Math.ceil((1.4 * diameterMm) / voxel / 2) * 2;
    const f = frame(voxel, {}, [Math.ceil(lengthMm / voxel), across, across]);
    const bend = { sagMm: 0.03 * lengthMm, waveMm: 0 };
    const line = bentLine(f.middle, nearX(0.03, random), 0.96 * lengthMm, bend, diameterMm / 4, random);
    return volume(f, [string("strut", line, diameterMm)]);
  };
}

function tree(random: SeededRandom): TrialSpec {
  const f = frame(FINE, {}, [104, 72, 60]);
  const at = (x: number, y: number, z: number): Vec3 => add(f.middle, scale([x, y, z], f.voxel));
  const wiggle = () => random.between(-3, 3);
  const [root, low, high] = [at(-46, wiggle(), wiggle()), at(-12 + wiggle(), 0, wiggle()), at(12 + wiggle(), 12, wiggle())];
  const ends = [at(44, 26 + wiggle(), 8), at(46, 6 + wiggle(), -8), at(44, -24 + wiggle(), wiggle())] as const;
  const join = (from: Vec3, to: Vec3, leave: Vec3, arrive: Vec3) => joiningLine(from, leave, to, arrive, f.voxel);
  const up: Vec3 = [1, 0.5, 0];
  const named = (from: string, to: string, line: Line, d0: number, d1: number): TrialString => ({
    from,
    to,
    line,
    diametersMm: [d0 * f.voxel, d1 * f.voxel],
  });
  return volume(f, [
    named("root", "low", join(root, low, [1, 0, 0], [1, 0, 0]), 7, 6),
    named("low", "high", join(low, high, up, up), 5, 5),
    named("low", "end 1", join(low, ends[2], [1, -0.5, 0], [1, -0.3, 0]), 4, 4),
    named("high", "end 2", join(high, ends[0], [1, 0.7, 0.2], [1, 0.3, 0.1]), 4, 3.5),
    named("high", "end 3", join(high, ends[1], [1, -0.1, -0.3], [1, -0.2, -0.1]), 4, 3.5),
  ]);
}

/** Strings that cross at an angle and touch where they do. */
function crossing(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const angle = random.between(0.45, 0.9);
  const turn = random.between(0, 2 * Math.PI);
  const side: Vec3 = [0, Math.cos(turn), Math.sin(turn)];
  const lift = normalise(cross([1, 0, 0], side));
  const bend = { sagMm: 5 * f.voxel, waveMm: f.voxel };
  const along = (sign: number): Vec3 => add([1, 0, 0], scale(side, sign * Math.tan(angle / 2)));
  const place = (sign: number) => add(f.middle, scale(lift, sign * 2 * f.voxel));
  return volume(f, [
    string("one", bentLine(place(1), along(1), 70 * f.voxel, { ...bend, sagMm: 0 }, f.voxel, random), 4 * f.voxel),
    string("other", bentLine(place(-1), along(-1), 70 * f.voxel, { ...bend, sagMm: 0 }, f.voxel, random), 4 * f.voxel),
  ]);
}

function threeTogether(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const bend = { sagMm: 10, waveMm: 2 };
  const middle = lineIn(f, random, bend);
  const side = anySide(random, [1, 0, 0]);
  const turned = normalise(add(scale(side, -0.5), scale(cross([1, 0, 0], side), 0.85)));
  return volume(f, [
    string("one", middle, 4 * f.voxel),
    string("two", besideLine(middle, side, 4 * f.voxel), 4 * f.voxel),
    string("three", besideLine(middle, turned, 4.5 * f.voxel), 4 * f.voxel),
  ]);
}

/** A string that runs along a sheet, touching it for the middle of its way. */
function alongSheet(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const line = lineIn(f, random, { sagMm: 3, waveMm: 1 });
  const normal = anySide(random, [1, 0, 0]);
  // Highest place of the string towards the sheet: there they touch.
  const heights = line.map((p) => p.reduce((sum, c, axis) => sum + (c - f.middle[axis]!) * normal[axis]!, 0));
  const thickness = 6 * f.voxel;
  const at = add(f.middle, scale(normal, Math.max(...heights) + 2 * f.voxel + thickness / 2));
  const sheet: TrialBody = { kind: "sheet", at, normal, thicknessMm: thickness, waveMm: 0, waveLengthMm: 3, level: 0.72 };
  return volume(f, [string("one", line, 4 * f.voxel)], [sheet]);
}

/** A string that passes a muscle's flank. */
function besideMuscle(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const line = lineIn(f, random, { sagMm: 6, waveMm: 1 });
  const side = anySide(random, [1, 0, 0]);
  const radius = 24 * f.voxel;
  const from = line[Math.floor(line.length / 2)]!;
  const ball: TrialBody = {
    kind: "ball",
    centre: add(from, scale(side, radius + 2.2 * f.voxel)),
    radiusMm: radius,
    level: 0.8,
  };
  return volume(f, [string("one", line, 4 * f.voxel)], [ball]);
}

function liquidBridge(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const line = lineIn(f, random, { sagMm: 8, waveMm: 1 });
  const side = anySide(random, [1, 0, 0]);
  const other = besideLine(line, side, 7 * f.voxel);
  const [a, b] = [Math.floor(line.length * 0.35), Math.floor(line.length * 0.6)];
  const bridge: TrialBody = {
    kind: "bridge",
    one: line.slice(a, b),
    other: other.slice(a, b),
    widthMm: 3 * f.voxel,
    level: 0.6,
  };
  return volume(f, [string("one", line, 4 * f.voxel), string("other", other, 4 * f.voxel)], [bridge]);
}

function artefacts(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const line = lineIn(f, random, { sagMm: 8, waveMm: 1.5 });
  const spots = [0.3, 0.7].map((t) => ({
    at: add(line[Math.floor(line.length * t)]!, scale(anySide(random, [1, 0, 0]), random.between(8, 11) * f.voxel)),
    radiusMm: random.between(2, 3) * f.voxel,
  }));
  const spoilt = { ...f, look: { ...f.look, ring: 0.25, streak: 0.35, spots } };
  return volume(spoilt, [string("one", line, 4 * f.voxel)]);
}

function flattened(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const along = anySide(random, [1, 0, 0]);
  const line = lineIn(f, random, { sagMm: 8, waveMm: 1 });
  return volume(f, [{ ...string("one", line, 7 * f.voxel), flat: { ratio: 2, along } }]);
}

function rimmed(random: SeededRandom): TrialSpec {
  const f = frame(FINE);
  const line = lineIn(f, random, { sagMm: 6, waveMm: 1 });
  return volume(f, [{ ...string("one", line, 10 * f.voxel), core: { share: 0.62, level: 0.4 } }]);
}

/** The trial volumes: each is a short description, and a seed makes it a volume cropped about its strings. */
export const TRIAL_VOLUMES: readonly TrialVolume[] = [
  {
    name: "three-voxels",
    about: "one bowed string three voxels thick",
    topic: "plain",
    hard: false,
    spec: one(frame(FINE), BOWED, 3),
  },
  {
    name: "taper",
    about: "one string from 0.15 to 0.6 mm at 30 um",
    topic: "plain",
    hard: false,
    spec: one(frame(0.03), { sagMm: 8, waveMm: 2 }, 5, 20),
  },
  {
    name: "twig",
    about: "one string of 0.15 mm at 20 um",
    topic: "plain",
    hard: false,
    spec: one(frame(0.02), BOWED, 7.5),
  },
  {
    name: "coarse",
    about: "one string of 0.4 mm at 100 um",
    topic: "plain",
    hard: false,
    spec: one(frame(0.1), { sagMm: 10, waveMm: 1 }, 4),
  },
  {
    name: "trunk",
    about: "one string of 3 mm at 100 um",
    topic: "plain",
    hard: false,
    spec: one(frame(0.1, {}, [124, 66, 66]), { sagMm: 6, waveMm: 0 }, 30, 30, 110),
  },
  {
    name: "flattened",
    about: "one string twice as wide as thick",
    topic: "plain",
    hard: false,
    spec: flattened,
  },
  {
    name: "dark",
    about: "one dark string in bright surroundings",
    topic: "plain",
    hard: false,
    spec: one(frame(FINE, { polarity: "dark" }), BOWED, 4),
  },
  {
    name: "anisotropic",
    about: "one string in slices 2.5 times as far apart as the pixels",
    topic: "plain",
    hard: false,
    spec: one(frame(0.03, {}, [96, 64, 28], 2.5), { sagMm: 8, waveMm: 1 }, 8),
  },
  {
    name: "artefacts",
    about: "rings, bright spots and their streaks",
    topic: "plain",
    hard: false,
    spec: artefacts,
  },
  {
    name: "along-sheet",
    about: "a string that touches a leaflet sheet on its way",
    topic: "plain",
    hard: false,
    spec: alongSheet,
  },
  {
    name: "beside-muscle",
    about: "a string that touches the flank of a muscle",
    topic: "plain",
    hard: false,
    spec: besideMuscle,
  },
  {
    name: "tree",
    about: "a tree with two forks",
    topic: "fork",
    hard: false,
    spec: tree,
  },
  {
    name: "rim",
    about: "a string with a bright rim and a dark core",
    topic: "rim",
    hard: false,
    spec: rimmed,
  },
  {
    name: "faint",
    about: "contrast-to-noise 3, three voxels thick",
    topic: "low-contrast",
    hard: true,
    spec: one(frame(FINE, { contrastToNoise: 3 }), BOWED, 3),
  },
  {
    name: "below-resolution",
    about: "a string thinner than the blur",
    topic: "below-resolution",
    hard: false,
    spec: one(frame(FINE, { blurFwhmMm: 0.16, contrastToNoise: 20 }), { sagMm: 8, waveMm: 1 }, 3),
  },
  {
    name: "strut-40",
    about: "2 mm at 40 um",
    topic: "thick",
    hard: false,
    spec: strut(0.04, 2),
  },
  {
    name: "strut-20",
    about: "2 mm at 20 um",
    topic: "thick",
    hard: false,
    spec: strut(0.02, 2),
  },
  {
    name: "strut-10",
    about: "2 mm at 10 um",
    topic: "thick",
    hard: false,
    spec: strut(0.01, 2),
  },
  {
    name: "touching-straight",
    about: "two straight strings that touch all along",
    topic: "touching",
    hard: false,
    spec: pair(FINE, STRAIGHT, 0, [4, 4]),
  },
  {
    name: "apart-straight",
    about: "two straight strings one voxel apart",
    topic: "touching",
    hard: false,
    spec: pair(FINE, STRAIGHT, 1, [4, 4]),
  },
  {
    name: "touching-bent",
    about: "two bowed strings that touch all along",
    topic: "touching",
    hard: true,
    spec: pair(FINE, BOWED, 0, [4, 4]),
  },
  {
    name: "apart-bent",
    about: "two bowed strings one voxel apart",
    topic: "touching",
    hard: false,
    spec: pair(FINE, BOWED, 1, [4, 4]),
  },
  {
    name: "thin-beside-thick",
    about: "a string of 3 voxels that touches one of 6, bowed",
    topic: "touching",
    hard: true,
    spec: pair(FINE, { sagMm: 10, waveMm: 1 }, 0, [3, 6]),
  },
  {
    name: "three-together",
    about: "three bowed strings, two of them touching the first",
    topic: "touching",
    hard: true,
    spec: threeTogether,
  },
  {
    name: "crossing",
    about: "two strings that cross and touch",
    topic: "touching",
    hard: false,
    spec: crossing,
  },
  {
    name: "liquid-bridge",
    about: "two strings joined by held liquid for a quarter of their length",
    topic: "touching",
    hard: true,
    spec: liquidBridge,
  },
];
