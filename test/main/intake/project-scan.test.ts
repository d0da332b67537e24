// Projections against maxima and minima taken here voxel by voxel; packing against Node's own zlib on bricks cut here.
import { gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { PackingSampler } from "#main/intake/packing/packing-sampler.ts";
import type { IntakeProgress } from "#main/intake/progress.ts";
import { projectScan } from "#main/intake/project-scan.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { Projections } from "#shared/volume/projections.ts";
import { bytesOf, scratchFolder, seeded, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const SIZE: Vec3 = [23, 17, 11];
const random = seeded(3);
const values = Array.from({ length: SIZE[0] * SIZE[1] * SIZE[2] }, () => Math.floor(random() * 200));
const at = (x: number, y: number, z: number) => values[(z * SIZE[1] + y) * SIZE[0] + x]!;
const range = (n: number) => Array.from({ length: n }, (_, k) => k);
const [xs, ys, zs] = SIZE.map(range) as [number[], number[], number[]];

/** Values of a picture put back from grey: black is the least, white the greatest of all three, within what 8 bits tell. */
const greys = (data: string) => Array.from(Buffer.from(data, "base64"));

describe("projections of a scan", () => {
  it.each([
    ["bright", Math.max, false],
    ["dark", Math.min, true],
    ["bright", Math.max, true],
  ] as const)("show the strongest %s voxel along each axis", async (polarity, strongest, gzip) => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "a.nrrd", { sizes: SIZE, type: "uchar", dtype: "uint8", values, gzip });
    const told: IntakeProgress[] = [];
    const answer = await projectScan({ path, polarity }, { onProgress: (progress) => told.push(progress) });
    const alongZ = ys.flatMap((y) => xs.map((x) => strongest(...zs.map((z) => at(x, y, z)))));
    const alongY = zs.flatMap((z) => xs.map((x) => strongest(...ys.map((y) => at(x, y, z)))));
    const alongX = zs.flatMap((z) => ys.map((y) => strongest(...xs.map((x) => at(x, y, z)))));
    // The grey window is not the point: order and equality of all pixels must be those of the values, save what it clips.
    const expected = [...alongZ, ...alongY, ...alongX];
    const found = [...greys(answer.alongZ.data), ...greys(answer.alongY.data), ...greys(answer.alongX.data)];
    expect(found).toHaveLength(expected.length);
    const byValue = new Map<number, Set<number>>();
    for (const [k, value] of expected.entries()) byValue.set(value, (byValue.get(value) ?? new Set()).add(found[k]!));
    const sorted = [...byValue].sort((a, b) => a[0] - b[0]);
    for (const [, seen] of sorted) expect(seen.size).toBe(1);
    const shown = sorted.map(([, seen]) => [...seen][0]!);
    for (let k = 1; k < shown.length; k++) expect(shown[k]).toBeGreaterThanOrEqual(shown[k - 1]!);
    expect([Math.min(...shown), Math.max(...shown)]).toEqual([0, 255]);
    expect([answer.alongZ.width, answer.alongZ.height, answer.alongX.width, answer.alongX.height]).toEqual([23, 17, 17, 11]);
    expect([answer.slices, answer.of]).toEqual([11, 11]);
    expect(told.at(-1)).toMatchObject({ progress: 1, step: "Looking through the scan" });
  });

  it("of a long scan stand for blocks of voxels, and keep a single bright one", () => {
    const size: Vec3 = [600, 40, 30];
    const pictures = new Projections(size, 30, false);
    for (let z = 0; z < 30; z++) {
      const slice = new Float32Array(600 * 40).fill(1);
      slice[5] = Number.NaN;
      if (z === 20) slice[39 * 600 + 599] = 9;
      pictures.add(z, slice);
    }
    const { alongZ, alongY, alongX } = pictures.pictures();
    // 600 voxels in at most 256 pixels: blocks of three.
    expect([alongZ.width, alongZ.height, alongY.height]).toEqual([200, 14, 10]);
    expect([alongZ.grey.indexOf(255), alongY.grey.indexOf(255)]).toEqual([13 * 200 + 199, 6 * 200 + 199]);
    expect(alongX.grey.indexOf(255)).toBe(6 * 14 + 13);
    expect(alongZ.grey.filter((grey) => grey === 255)).toHaveLength(1);
  });

  it("stop when they are told to", async () => {
    const path = await writeNrrd(await scratchFolder(), "a.nrrd", { sizes: SIZE, type: "uchar", dtype: "uint8", values });
    const stop = new AbortController();
    stop.abort();
    await expect(projectScan({ path, polarity: "bright" }, { signal: stop.signal })).rejects.toMatchObject({ tag: "cancelled" });
  });
});

describe("a sample of packing", () => {
  it("packs bricks of the scan as the store would hold them", () => {
    const size: Vec3 = [70, 33, 40];
    const voxels = Array.from({ length: 70 * 33 * 40 }, () => Math.floor(random() * 900));
    const sampler = new PackingSampler(size, "uint16", 1);
    expect(sampler.measure(() => 0)).toBeNull();
    for (let z = 0; z < 40; z++) sampler.add(z, Uint16Array.from(voxels.slice(z * 70 * 33, (z + 1) * 70 * 33)));
    let time = 0;
    const sample = sampler.measure(() => time++)!;
    // One slab in the middle (slices 4 to 36), two bricks across, one down: corners at x 9 and 28, y 0.
    const plain = [9, 28].map((x0) =>
      bytesOf(
        range(32).flatMap((z) => range(32).flatMap((y) => range(32).map((x) => voxels[((z + 4) * 33 + y) * 70 + x + x0]!))),
        "uint16",
        true,
      ),
    );
    const packed = plain.map((bytes) => gzipSync(bytes, { level: 1 }).length).reduce((a, b) => a + b);
    expect(sample).toEqual({ ratio: packed / (2 * 65536), unpackMs: 1, packedBytesPerSecond: (2 * 65536 * 1000) / 2, bricks: 2 });
  });
});
