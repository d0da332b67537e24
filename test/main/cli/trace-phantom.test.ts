import { mkdtemp, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { dist, distanceToPolyline, lengthOf, quantileOf } from "#test/shared/tracing/tube-phantom.ts";

interface Strand {
  id: string;
  points: Vec3[];
  radii: (number | null)[];
}

let folder = "";
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "accuracy-"));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function strandsOf(name: string): Promise<Strand[]> {
  const file = JSON.parse(await readFile(join(folder, name), "utf8"));
  return file.trees.flatMap((tree: { strands: Strand[] }) => tree.strands);
}

// The truth comes from the synthetic specimen, which shares no kernel with the tracer; the distances are taken here. Limits: the
// accuracy asked for at contrast-to-noise 5 (noise of a fifth of a string's contrast), away from nodes: farther than four radii.
it("traces a synthetic specimen from its pins within a quarter of a voxel, 2 % of length and 5 % of radius", async () => {
  const made = await runVerb([
    "phantom",
    "--out",
    folder,
    "--seed",
    "71",
    "--size",
    "160,160,200",
    "--trees",
    "2",
    "--noise",
    "0.2",
  ]);
  expect(made.code).toBe(0);
  const [scan, pins, out] = ["volume.nrrd", "pins.chordae.json", "mine.chordae.json"].map((name) => join(folder, name)) as [
    string,
    string,
    string,
  ];
  const traced = await runVerb(["trace", scan, "--pins", pins, "--out", out, "--json"]);
  expect(traced.code).toBe(0);
  const truth = new Map((await strandsOf("true.chordae.json")).map((strand) => [strand.id, strand]));
  const mine = await strandsOf("mine.chordae.json");
  expect(mine.length).toBe(truth.size);
  const voxel = 0.04;
  const errors: number[] = [];
  const lengths: number[] = [];
  const radii: number[] = [];
  for (const strand of mine) {
    const real = truth.get(strand.id)!;
    lengths.push(Math.abs(lengthOf(strand.points) / lengthOf(real.points) - 1));
    const known = real.radii.filter((radius) => radius !== null);
    const radius = known.reduce((sum, r) => sum + r, 0) / known.length;
    const [from, to] = [strand.points[0]!, strand.points[strand.points.length - 1]!];
    strand.points.forEach((p, i) => {
      if (Math.min(dist(p, from), dist(p, to)) < 4 * radius) return;
      errors.push(distanceToPolyline(p, real.points) / voxel);
      let nearest = 0;
      for (let k = 1; k < real.points.length; k++) if (dist(real.points[k]!, p) < dist(real.points[nearest]!, p)) nearest = k;
      const expected = real.radii[nearest];
      const found = strand.radii[i];
      if (typeof expected === "number" && typeof found === "number" && 2 * expected >= 2 * 0.07)
        radii.push(Math.abs(found / expected - 1));
    });
  }
  for (const list of [errors, lengths, radii]) list.sort((a, b) => a - b);
  expect(errors.length).toBeGreaterThan(200);
  expect(radii.length).toBeGreaterThan(200);
  expect(quantileOf(errors, 0.5)).toBeLessThan(0.25);
  expect(quantileOf(errors, 0.95)).toBeLessThan(0.75);
  expect(quantileOf(lengths, 0.5)).toBeLessThan(0.02);
  expect(quantileOf(radii, 0.5)).toBeLessThan(0.05);
  console.log(
    `traced ${mine.length} strands: error ${quantileOf(errors, 0.5).toFixed(3)} / ${quantileOf(errors, 0.95).toFixed(3)} voxel, length ${(100 * quantileOf(lengths, 0.5)).toFixed(2)} %, radius ${(100 * quantileOf(radii, 0.5)).toFixed(2)} %`,
  );
});
