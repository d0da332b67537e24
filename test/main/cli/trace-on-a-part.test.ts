// A tree traced on a crop of a scan against the same pins traced on the whole: the phantom is drawn by the tests, the frame of
// the crop is written here from the definition (position = origin + direction * (index * spacing)).
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { takeIn } from "#main/intake/take-in.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { fileVolume } from "#shared/formats/chordae/header-of-specimen.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { Region } from "#shared/volume/region/region.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { curve, drawTubes, line } from "#test/shared/tracing/tube-phantom.ts";

const S = 0.04;
const SIZE = [84, 60, 56] as const;
const FORK: Vec3 = [1.6, 1.1, 1.0];
const trunk = line([0.7, 1.1, 1.0], FORK);
const bow = curve((t): Vec3 => [FORK[0] + 1.1 * t, FORK[1] + 0.4 * Math.sin(1.5 * t), FORK[2] + 0.2 * t]);
const twig = line(FORK, [2.6, 0.7, 0.9]);
const rounded = (p: Vec3): Vec3 => p.map((v) => Math.round(v * 1e6) / 1e6) as unknown as Vec3;

let folder = "";
const records: Record<string, SpecimenRecord> = {};

async function specimen(name: string, region?: Region): Promise<void> {
  const order = {
    library: folder,
    id: `${name}aaaaaaaaaaaaaaaaaaaa`.slice(0, 20),
    created: 0,
    name,
    spacing: [S, S, S],
  } as const;
  const path = join(folder, "scan.nrrd");
  const made = await takeIn({ ...order, path, handedness: "unknown", facts: {}, ...(region ? { region } : {}) });
  records[name] = made.record;
}

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "trace-part-"));
  const tubes = [trunk, bow, twig].map((points, k) => ({ points, radius: () => [0.14, 0.1, 0.1][k]! }));
  const phantom = drawTubes(SIZE, [S, S, S], tubes, { fwhmMm: 0.07, noise: 0.05, seed: 4 });
  const head = [
    "NRRD0005",
    "type: uint16",
    "dimension: 3",
    "space: left-posterior-superior",
    `sizes: ${SIZE.join(" ")}`,
    `space directions: (${S},0,0) (0,${S},0) (0,0,${S})`,
    'space units: "mm" "mm" "mm"',
    "space origin: (0,0,0)",
    "endian: little",
    "encoding: raw",
  ];
  const voxels = Uint16Array.from(phantom.voxels, Math.round);
  await writeFile(
    join(folder, "scan.nrrd"),
    Buffer.concat([Buffer.from(`${head.join("\n")}\n\n`), new Uint8Array(voxels.buffer)]),
  );
  await specimen("whole");
  // Every string lies 8 voxels or more inside the box.
  await specimen("crop", { crop: [8, 8, 10, 80, 56, 50], bin: 1 });
  await specimen("binned", { crop: [8, 8, 10, 80, 56, 50], bin: 2 });
}, 120_000);
afterAll(() => rm(folder, { recursive: true, force: true }));

/** Traces the pins on a specimen's scan; the pins say that they belong to `of`. */
async function traced(on: string, of: string): Promise<{ path: string; code: number; stderr: string }> {
  const [name, volume] = [join(folder, `${on}-${of}`), fileVolume(of, records[of]!.volume)];
  const nodes = [trunk[0]!, FORK, bow.at(-1)!, twig.at(-1)!].map((position, k) => ({
    id: `n${k + 1}`,
    kind: k === 0 ? "origin" : k === 1 ? "fork" : "insertion",
    position: rounded(position),
  }));
  const strands = [
    ["n1", "n2"],
    ["n2", "n3"],
    ["n2", "n4"],
  ].map(([from, to], k) => ({ id: `s${k + 1}`, from, to }));
  const file = { format: "chordae-trees", version: 1, unit: "mm", frame: "LPS", volume };
  await writeFile(`${name}.json`, JSON.stringify({ ...file, trees: [{ id: "t1", root: "n1", nodes, strands }] }));
  const path = `${name}.chordae.json`;
  const { id } = records[on]!;
  const done = await runVerb(["trace", join(folder, "specimens", id), "--pins", `${name}.json`, "--out", path]);
  return { path, ...done };
}

describe("a tree on a part of a scan", () => {
  it("lies where the same pins give it on the whole, and no verb warns", async () => {
    const [whole, crop] = [await traced("whole", "whole"), await traced("crop", "crop")];
    expect([whole.code, crop.code]).toEqual([0, 0]);
    const compared = await runVerb(["compare", whole.path, crop.path, "--json"]);
    expect(compared.code).toBe(0);
    const answer = JSON.parse(compared.stdout);
    expect(answer.warnings).toEqual([]);
    // Same structure: only the strands' relative difference in length may cost something.
    expect(answer.whole.ged).toBeLessThan(0.01);
    expect(answer.pairs).toHaveLength(1);
    // The same voxels are looked at; only the pyramid's grid may have moved, by less than a voxel.
    expect(answer.whole.distances.hd).toBeLessThan(0.25 * S);
    expect(answer.whole.detection.length).toEqual({ recall: 1, precision: 1 });
  });

  it("lies within half a voxel of the whole's on a binned scan", async () => {
    const [whole, binned] = [await traced("whole", "whole"), await traced("binned", "binned")];
    const answer = JSON.parse((await runVerb(["compare", whole.path, binned.path, "--json"])).stdout);
    expect(answer.warnings).toEqual([]);
    expect(answer.whole.distances.mean).toBeLessThan(S / 2);
  });

  it.each([
    ["whole", "crop"],
    ["crop", "whole"],
    ["binned", "crop"],
  ])("is traced on the %s scan from pins of the %s scan without asking", async (on, of) => {
    const done = await traced(on, of);
    expect([done.code, done.stderr.includes("another scan")]).toEqual([0, false]);
  });

  it("counts as one specimen with passes over the whole in a study of agreement", async () => {
    const paths = [(await traced("whole", "whole")).path, (await traced("crop", "crop")).path];
    for (const [k, path] of paths.entries())
      await writeFile(path, JSON.stringify({ ...JSON.parse(await readFile(path, "utf8")), annotator: `AN-${k + 1}`, pass: 1 }));
    const done = await runVerb(["agree", ...paths, "--json"]);
    expect(done.code).toBe(0);
    const answer = JSON.parse(done.stdout);
    expect(answer.pairwise).toHaveLength(1);
    expect(JSON.stringify(answer.notes)).not.toContain("different scans");
  });
});
