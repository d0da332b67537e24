import { mkdtemp, readdir, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gunzipSync } from "node:zlib";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { writeLabels } from "#main/intake/write-labels.ts";
import { CHORDAE_FORMAT, type ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-labels-"));
});
afterEach(() => rm(folder, { recursive: true }));

/** One straight string along z through the middle of a scan of 9 x 9 x 5 voxels of 1 mm, radius 1.2 mm. */
const file: ChordaeFile = {
  format: CHORDAE_FORMAT,
  version: 1,
  unit: "mm",
  frame: "LPS",
  volume: { size: [9, 9, 5], spacing: [1, 1, 1], origin: [0, 0, 0], direction: [1, 0, 0, 0, 1, 0, 0, 0, 1] },
  trees: [
    {
      id: "t1",
      root: "n1",
      nodes: [
        { id: "n1", kind: "origin", position: [4, 4, 0] },
        { id: "n2", kind: "insertion", position: [4, 4, 4] },
      ],
      strands: [
        {
          id: "s1",
          from: "n1",
          to: "n2",
          points: [
            [4, 4, 0],
            [4, 4, 4],
          ],
          radii: [1.2, 1.2],
        },
      ],
    },
  ],
};

describe("writing a label volume", () => {
  it("gives an NRRD file whose voxels, unpacked by Node's own gzip, are the tube", async () => {
    const path = join(folder, "labels.nrrd");
    const { bytes } = await writeLabels(file, path);
    const whole = await readFile(path);
    expect(whole.length).toBe(bytes);
    const head = whole.indexOf("\n\n");
    const header = whole.subarray(0, head).toString();
    for (const line of ["type: uint16", "sizes: 9 9 5", "encoding: gzip", "endian: little"]) expect(header).toContain(line);
    const voxels = gunzipSync(whole.subarray(head + 2));
    expect(voxels.length).toBe(9 * 9 * 5 * 2);
    // By hand: a disc of radius 1.2 covers the centre and its four neighbours, the corners at 1.41 lie outside.
    const middle = Array.from({ length: 81 }, (_, i) => voxels.readUInt16LE(2 * (2 * 81 + i)));
    const covered = middle.flatMap((value, i) => (value === 0 ? [] : [[i % 9, Math.floor(i / 9), value]]));
    expect(covered).toEqual([
      [4, 3, 1],
      [3, 4, 1],
      [4, 4, 1],
      [5, 4, 1],
      [4, 5, 1],
    ]);
  });

  it("leaves nothing when it is stopped, the scan's grid is missing, or the place is taken", async () => {
    const stopped = AbortSignal.abort();
    await expect(writeLabels(file, join(folder, "a.nrrd"), { signal: stopped })).rejects.toMatchObject({ tag: "cancelled" });
    const { volume: _, ...gridless } = file;
    await expect(writeLabels(gridless, join(folder, "b.nrrd"))).rejects.toMatchObject({ tag: "unreadable-input" });
    expect(await readdir(folder)).toEqual([]);
    await writeLabels(file, join(folder, "c.nrrd"));
    const before = await readFile(join(folder, "c.nrrd"));
    await expect(writeLabels(file, join(folder, "c.nrrd"))).rejects.toMatchObject({ tag: "write-failed" });
    expect(await readFile(join(folder, "c.nrrd"))).toEqual(before);
  });
});
