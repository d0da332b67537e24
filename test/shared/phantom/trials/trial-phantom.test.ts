import { describe, expect, it } from "vitest";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { type TrialPhantom, trialNamed, trialPhantom, trialSpecimen } from "#shared/phantom/trials/trial-phantom.ts";
import { TRIAL_VOLUMES } from "#shared/phantom/trials/trial-volumes.ts";

const SEED = 121;
const small = TRIAL_VOLUMES.filter(({ topic }) => topic !== "thick" && topic !== "plain");
const strandsOf = (made: TrialPhantom) => made.truth.trees.flatMap((tree) => tree.strands);

describe("trial volumes", () => {
  it("are many, each with a name of its own, some of them hard", () => {
    expect(TRIAL_VOLUMES.length).toBeGreaterThanOrEqual(12);
    expect(new Set(TRIAL_VOLUMES.map(({ name }) => name)).size).toBe(TRIAL_VOLUMES.length);
    expect(TRIAL_VOLUMES.filter(({ hard }) => hard).length).toBeGreaterThanOrEqual(3);
    expect(() => trialNamed("nothing")).toThrow(/three-voxels/);
  });

  it("hold valid true trees inside the scan, and clicks within a quarter of a radius of the nodes", () => {
    for (const volume of small) {
      const made = trialPhantom(volume, SEED);
      expect(() => checkChordaeFile(made.truth, volume.name)).not.toThrow();
      const top = made.grid.size.map((side, axis) => (side - 1) * made.grid.spacing[axis]!);
      for (const strand of strandsOf(made))
        for (const p of strand.points!) for (const [axis, c] of p.entries()) expect(c >= 0 && c <= top[axis]!).toBe(true);
      const widest = Math.max(...strandsOf(made).flatMap((strand) => strand.radii as number[]));
      for (const node of made.truth.trees.flatMap((tree) => tree.nodes))
        expect(distance(node.position, made.clicks.get(node.id)!)).toBeLessThanOrEqual(0.25 * widest + 1e-6);
    }
  });

  it("are the same bytes for the same seed, and others for another", () => {
    const volume = trialNamed("crossing");
    const [a, b, c] = [SEED, SEED, SEED + 1].map((seed) => trialPhantom(volume, seed));
    const bytes = (made: TrialPhantom | undefined) => Buffer.from(made!.voxels.buffer);
    expect(bytes(b).equals(bytes(a))).toBe(true);
    expect(b!.truth).toEqual(a!.truth);
    expect(bytes(c).equals(bytes(a))).toBe(false);
    const { grid, renderSlab } = trialSpecimen(a!);
    const plane = grid.size[0] * grid.size[1];
    const slab = new Uint16Array(2 * plane);
    renderSlab(7, 9, slab);
    expect(slab).toEqual(a!.voxels.slice(7 * plane, 9 * plane));
  });

  it("keep neighbours as far apart as they say: touching, or by a voxel", () => {
    for (const [name, gap] of [
      ["touching-straight", 0],
      ["touching-bent", 0],
      ["thin-beside-thick", 0],
      ["apart-straight", 1],
      ["apart-bent", 1],
    ] as const) {
      const made = trialPhantom(trialNamed(name), SEED);
      const [one, other] = strandsOf(made) as [ReturnType<typeof strandsOf>[0], ReturnType<typeof strandsOf>[0]];
      const inner = one.points!.slice(8, -8);
      for (const p of inner) {
        const apart = nearestOnPolyline(other.points!, p).distance - one.radii![0]! - other.radii![0]!;
        // The neighbour is drawn at the distance of the axes' normals, to within what bends make of it.
        expect(Math.abs(apart / 0.04 - gap)).toBeLessThan(0.1);
      }
    }
  });

  it("have the contrast-to-noise they say, bright or dark", () => {
    for (const name of ["three-voxels", "faint", "dark"]) {
      const made = trialPhantom(trialNamed(name), SEED);
      const strand = strandsOf(made)[0]!;
      const far: number[] = [];
      made.voxels.forEach((value, o) => {
        if (o % 211 !== 0) return;
        const [nx, ny] = made.grid.size;
        const p = [o % nx, Math.floor(o / nx) % ny, Math.floor(o / (nx * ny))].map((i) => i * 0.04) as [number, number, number];
        if (nearestOnPolyline(strand.points!, p).distance > 0.4) far.push(value);
      });
      const mean = far.reduce((sum, value) => sum + value, 0) / far.length;
      const spread = Math.sqrt(far.reduce((sum, value) => sum + (value - mean) ** 2, 0) / far.length);
      // Grey values of a string stand 10000 from the background.
      expect(10000 / spread / made.spec.look.contrastToNoise).toBeGreaterThan(0.93);
      expect(10000 / spread / made.spec.look.contrastToNoise).toBeLessThan(1.07);
      const middle = strand.points![strand.points!.length >> 1]!.map((c) => Math.round(c / 0.04));
      const around: number[] = [];
      for (let k = 0; k < 27; k++) {
        const [x, y, z] = [
          middle[0]! + (k % 3) - 1,
          middle[1]! + (Math.floor(k / 3) % 3) - 1,
          middle[2]! + Math.floor(k / 9) - 1,
        ];
        around.push(made.voxels[(z * made.grid.size[1] + y) * made.grid.size[0] + x]!);
      }
      const raised = around.reduce((sum, value) => sum + value, 0) / 27 - mean;
      expect(Math.sign(raised)).toBe(made.spec.look.polarity === "bright" ? 1 : -1);
    }
  });
});
