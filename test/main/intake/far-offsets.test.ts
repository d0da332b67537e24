// Voxels beyond 4 GiB of a file, where a 32-bit byte offset would wrap and read something else. The files are sparse: only the
// header and two known planes take room. Headers are put together here from each format's own description.
import { open, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { niftiBytes } from "#test/main/intake/nifti/nifti-by-hand.ts";
import { SETTLED, scratchFolder } from "#test/main/intake/written-by-hand.ts";

const SIDE = 1024;
const PLANE_BYTES = 2 * SIDE * SIDE;
/** The last plane begins 256 planes beyond 4 GiB; with offsets of 32 bits it would be read from plane 256. */
const PLANES = 2048 + 257;

/** Plane `z` of every file: its own number in each voxel, moved along the row. */
function known(z: number): Uint16Array {
  return Uint16Array.from({ length: SIDE * SIDE }, (_, n) => z + (n % SIDE));
}

/** A file of {@link PLANES} planes behind a head, all of it holes but the planes named. */
async function writeSparse(path: string, head: Uint8Array, planes: readonly number[]): Promise<void> {
  const file = await open(path, "w");
  await file.write(head, 0, head.byteLength, 0);
  for (const z of planes) await file.write(known(z), 0, PLANE_BYTES, head.byteLength + z * PLANE_BYTES);
  await file.truncate(head.byteLength + PLANES * PLANE_BYTES);
  await file.close();
}

const nrrdHead = () =>
  Buffer.from(
    [
      "NRRD0004",
      "type: uint16",
      "dimension: 3",
      `sizes: ${SIDE} ${SIDE} ${PLANES}`,
      "endian: little",
      "encoding: raw",
      ...SETTLED,
      "",
      "",
    ].join("\n"),
  );

describe("voxels beyond 4 GiB of a file", { timeout: 60_000 }, () => {
  const wrapped = PLANES - 1 - 2 ** 32 / PLANE_BYTES;
  let folder: string;
  beforeAll(async () => {
    folder = await scratchFolder();
    expect((PLANES - 1) * PLANE_BYTES).toBeGreaterThan(2 ** 32);
  });

  const families: [string, () => Promise<string>][] = [
    [
      "NRRD",
      async () => {
        await writeSparse(join(folder, "far.nrrd"), nrrdHead(), [wrapped, PLANES - 1]);
        return join(folder, "far.nrrd");
      },
    ],
    [
      "MetaImage",
      async () => {
        const header = [
          "ObjectType = Image",
          "NDims = 3",
          "BinaryData = True",
          "BinaryDataByteOrderMSB = False",
          `DimSize = ${SIDE} ${SIDE} ${PLANES}`,
          "ElementSpacing = 0.02 0.02 0.02",
          "ElementType = MET_USHORT",
          "ElementDataFile = LOCAL",
          "",
        ].join("\n");
        await writeSparse(join(folder, "far.mha"), Buffer.from(header), [wrapped, PLANES - 1]);
        return join(folder, "far.mha");
      },
    ],
    [
      "NIfTI-1",
      async () => {
        const head = niftiBytes({
          sizes: [SIDE, SIDE, PLANES],
          dtype: "uint16",
          values: [],
          xyzt: 2,
          pixdim: [1, 0.02, 0.02, 0.02],
        });
        await writeSparse(join(folder, "far.nii"), head, [wrapped, PLANES - 1]);
        return join(folder, "far.nii");
      },
    ],
    [
      "raw voxels with a sidecar",
      async () => {
        const sidecar = { format: "tautline-raw", version: 1, file: "far.raw", size: [SIDE, SIDE, PLANES], dtype: "uint16" };
        await writeSparse(join(folder, "far.raw"), Buffer.alloc(0), [wrapped, PLANES - 1]);
        const rest = { endian: "little", spacing: [0.02, 0.02, 0.02], unit: "mm" };
        await writeFile(join(folder, "far.raw.json"), JSON.stringify({ ...sidecar, ...rest }));
        return join(folder, "far.raw.json");
      },
    ],
  ];

  it.each(families)("are read where they lie: %s", async (_family, write) => {
    const source = await openScan(await write());
    try {
      expect(source.header.size).toEqual([SIDE, SIDE, PLANES]);
      let seen = 0;
      for await (const { z, count, data } of source.readPlanes(PLANES - 1, PLANES)) {
        expect([z, count]).toEqual([PLANES - 1, 1]);
        expect(Buffer.compare(Buffer.from(data.buffer, data.byteOffset, data.byteLength), Buffer.from(known(z).buffer))).toBe(0);
        seen++;
      }
      expect(seen).toBe(1);
    } finally {
      await source.close();
    }
  });

  it("of a NIfTI-1 side longer than its 16 bits can say are refused, not read as something smaller", async () => {
    const head = niftiBytes({
      sizes: [4, 4, 40_000 - 65_536],
      dtype: "uint16",
      values: [],
      xyzt: 2,
      pixdim: [1, 0.02, 0.02, 0.02],
    });
    const path = join(folder, "long.nii");
    await writeFile(path, Buffer.concat([head, Buffer.alloc(4 * 4 * 40_000 * 2)]));
    await expect(openScan(path)).rejects.toMatchObject({ tag: "unreadable-input" });
  });
});
