import { describe, expect, it } from "vitest";
import { type Matrix3, pointMm, roundPoint, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import {
  ARRAY_TURNS,
  blindTurns,
  chirality,
  shownFromTrue,
  storedIndex,
  trueFromShown,
  turnedFrame,
} from "#shared/study/turn.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";

// Checked against linear algebra written down here: rotation matrices, determinants and `position = origin + direction * index *
// spacing` (the exchange format's definition of a grid). No outside program.

/** Rotation about an axis by an angle. @source Rodrigues 1840 */
function rotation([x, y, z]: Vec3, degrees: number): Matrix3 {
  const [c, s] = [Math.cos((degrees * Math.PI) / 180), Math.sin((degrees * Math.PI) / 180)];
  const n = Math.hypot(x, y, z);
  const [a, b, d] = [x / n, y / n, z / n];
  const t = 1 - c;
  return [
    t * a * a + c, t * a * b - s * d, t * a * d + s * b,
    t * a * b + s * d, t * b * b + c, t * b * d - s * a,
    t * a * d - s * b, t * b * d + s * a, t * d * d + c,
  ]; // biome-ignore format: rows of a matrix
}

const DIRECTIONS: Record<string, Matrix3> = {
  "the frame's own axes": [1, 0, 0, 0, 1, 0, 0, 0, 1],
  "axes exchanged and turned back": [0, -1, 0, 0, 0, 1, -1, 0, 0],
  "left-handed axes": [1, 0, 0, 0, 1, 0, 0, 0, -1],
  "left-handed exchanged axes": [0, 1, 0, 1, 0, 0, 0, 0, 1],
  "oblique axes": rotation([1, 2, -0.5], 33),
};

const grid = (direction: Matrix3): VolumeGrid => ({
  size: sizeXyz(5, 7, 4),
  // Spacings and an origin that no power of ten divides.
  spacing: spacingMm(0.0213333333, 0.04, 0.0371),
  origin: pointMm(-12.34567891, 0.1 / 3, 7.7),
  direction,
  frame: "LPS",
});

const onGrid = (random: SeededRandom) => roundPoint([random.between(-60, 60), random.between(-60, 60), random.between(-60, 60)]);

describe.each(Object.entries(DIRECTIONS))("a scan along %s", (_, direction) => {
  const scan = grid(direction);
  const proper = ARRAY_TURNS.filter((turn) => chirality(turnedFrame(scan, turn)) === 1);

  it("can be turned in 24 ways and mirrored in 24", () => {
    expect(ARRAY_TURNS).toHaveLength(48);
    expect(new Set(ARRAY_TURNS.map((turn) => JSON.stringify(turn))).size).toBe(48);
    expect(proper).toHaveLength(24);
  });

  it("gives every place of the 1e-6 mm grid back bit by bit, by all 24 turns", () => {
    const random = new SeededRandom(101);
    for (const turn of proper) {
      const frame = turnedFrame(scan, turn);
      for (let k = 0; k < 200; k += 1) {
        const place = onGrid(random);
        expect(trueFromShown(frame, shownFromTrue(frame, place))).toEqual(place);
      }
    }
  });

  it("puts a voxel's shown centre on its true centre", () => {
    for (const turn of proper) {
      const frame = turnedFrame(scan, turn);
      const [nx, ny, nz] = frame.grid.size;
      for (const shown of [
        [0, 0, 0],
        [nx - 1, 0, 0],
        [1, ny - 1, 2],
        [nx - 1, ny - 1, nz - 1],
      ] as const) {
        const expected = indexToMm(scan, storedIndex(turn, scan.size, shown));
        const found = trueFromShown(frame, indexToMm(frame.grid, shown));
        // One rounding of the frame's shift and one of the place, each half of 1e-6 mm at most.
        for (const axis of [0, 1, 2]) expect(Math.abs(found[axis]! - expected[axis]!)).toBeLessThanOrEqual(1.001e-6);
      }
    }
  });

  it("keeps distances and handedness", () => {
    const random = new SeededRandom(7);
    for (const turn of proper) {
      const frame = turnedFrame(scan, turn);
      const places = Array.from({ length: 4 }, () => onGrid(random));
      const [a, b, c, d] = places.map((place) => shownFromTrue(frame, place)) as unknown as [Vec3, Vec3, Vec3, Vec3];
      const volume = (p: Vec3, q: Vec3, r: Vec3, s: Vec3) => {
        const [u, v, w] = [q, r, s].map((x) => x.map((value, k) => value - p[k]!)) as [number[], number[], number[]];
        return (
          u[0]! * (v[1]! * w[2]! - v[2]! * w[1]!) -
          u[1]! * (v[0]! * w[2]! - v[2]! * w[0]!) +
          u[2]! * (v[0]! * w[1]! - v[1]! * w[0]!)
        );
      };
      const [p, q, r, s] = places as unknown as [Vec3, Vec3, Vec3, Vec3];
      // A tetrahedron's signed volume changes its sign in a mirror and only there.
      expect(volume(a, b, c, d)).toBeCloseTo(volume(p, q, r, s), 6);
      expect(Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2])).toBeCloseTo(Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]), 9);
    }
  });

  it("is shown blinded by turns alone, never as it is stored and never along its true coordinates", () => {
    const turns = blindTurns(scan);
    expect(turns.length).toBeGreaterThanOrEqual(22);
    expect(turns.length).toBeLessThanOrEqual(24);
    for (const turn of turns) {
      const frame = turnedFrame(scan, turn);
      expect(chirality(frame)).toBe(1);
      expect(turn).not.toEqual({ axes: [0, 1, 2], flips: [false, false, false] });
      expect(frame.linear.map((value) => Math.round(value * 1e6) / 1e6 + 0)).not.toEqual([1, 0, 0, 0, 1, 0, 0, 0, 1]);
      expect(frame.grid).toMatchObject({ origin: [0, 0, 0], direction: [1, 0, 0, 0, 1, 0, 0, 0, 1], frame: "scan" });
    }
  });
});

describe("places drawn in the turned frame", () => {
  it("of a scan along the frame's axes come back as whole numbers of 1e-6 mm, exchanged and added", () => {
    const scan = grid(DIRECTIONS["axes exchanged and turned back"]!);
    const random = new SeededRandom(11);
    for (const turn of blindTurns(scan)) {
      const frame = turnedFrame(scan, turn);
      for (let k = 0; k < 100; k += 1) {
        const shown = onGrid(random);
        const nm = shown.map((value) => BigInt(Math.round(value * 1e6)));
        const expected = [0, 1, 2].map((row) => {
          const moved = [0, 1, 2].reduce((sum, col) => sum + BigInt(frame.linear[3 * row + col]!) * nm[col]!, 0n);
          return Number(moved + BigInt(Math.round(frame.shift[row]! * 1e6))) / 1e6;
        });
        expect(trueFromShown(frame, shown)).toEqual(expected);
      }
    }
  });

  it("of an oblique scan come back to the nearest place of the grid", () => {
    const scan = grid(DIRECTIONS["oblique axes"]!);
    const random = new SeededRandom(13);
    for (const turn of blindTurns(scan)) {
      const frame = turnedFrame(scan, turn);
      const shown = onGrid(random);
      const exact = [0, 1, 2].map(
        (row) => [0, 1, 2].reduce((sum, col) => sum + frame.linear[3 * row + col]! * shown[col]!, 0) + frame.shift[row]!,
      );
      const found = trueFromShown(frame, shown);
      for (const axis of [0, 1, 2]) expect(Math.abs(found[axis]! - exact[axis]!)).toBeLessThanOrEqual(0.5001e-6);
    }
  });
});
