import { open, rm, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { scanInfo } from "#main/intake/scan-info.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { fuzzFile } from "#test/main/intake/fuzz.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";

const VALUES = Array.from({ length: 24 }, (_, k) => k * 1000);
const LAYOUT = { size: sizeXyz(2, 3, 4), dtype: "uint16", littleEndian: true, offset: 0, spacing: null, unit: null } as const;
const SIDECAR = { format: "tautline-raw", version: 1, size: [2, 3, 4], dtype: "uint16", endian: "little" };

async function voxelsOf(path: string, choice = {}): Promise<number[]> {
  const source = await openScan(path, choice);
  try {
    return await gatherVoxels(source);
  } finally {
    await source.close();
  }
}

async function withSidecar(sidecar: object, bytes: Uint8Array = bytesOf(VALUES, "uint16", true)): Promise<string> {
  const path = join(await scratchFolder(), "a.raw");
  await writeFile(path, bytes);
  await writeFile(`${path}.json`, JSON.stringify(sidecar));
  return path;
}

describe("raw voxels", () => {
  it("are read as the flags say, in both byte orders and past an offset", async () => {
    const folder = await scratchFolder();
    for (const littleEndian of [true, false])
      for (const offset of [0, 13]) {
        const path = join(folder, "a.raw");
        await writeFile(path, Buffer.concat([Buffer.alloc(offset, 1), bytesOf(VALUES, "uint16", littleEndian)]));
        expect(await voxelsOf(path, { raw: { ...LAYOUT, littleEndian, offset } })).toEqual(VALUES);
      }
  });

  it("are read as a sidecar says, opened by either file; its unit settles the voxel size", async () => {
    const path = await withSidecar({ ...SIDECAR, spacing: [40, 40, 50], unit: "um" });
    expect(await voxelsOf(path)).toEqual(VALUES);
    expect(await voxelsOf(`${path}.json`)).toEqual(VALUES);
    const info = await scanInfo(path);
    expect(info).toMatchObject({
      family: "raw",
      spacing: [0.04, 0.04, 0.05],
      headerSpacing: [40, 40, 50],
      unit: "um",
      frame: "scan",
    });
    const other = join(path, "..", "about.json");
    await writeFile(other, JSON.stringify({ ...SIDECAR, file: "a.raw" }));
    expect(await voxelsOf(other)).toEqual(VALUES);
    expect((await scanInfo(other)).warnings.map((w) => w.code)).toEqual(["no-unit", "no-spacing", "no-frame"]);
  });

  it("begin with any bytes, also those of another family, when a sidecar stands beside them", async () => {
    const bytes = Buffer.from(bytesOf(VALUES, "uint16", true));
    bytes.write("NRRD0004", 0, "latin1");
    expect((await voxelsOf(await withSidecar(SIDECAR, bytes))).slice(4)).toEqual(VALUES.slice(4));
  });

  it("beyond 4 GiB into their file are read there (a sparse file)", async () => {
    const path = join(await scratchFolder(), "far.raw");
    const at = 5 * 2 ** 30 + 7;
    const file = await open(path, "w");
    await file.write(bytesOf(VALUES, "uint16", true), 0, 48, at);
    await file.close();
    expect(await voxelsOf(path, { raw: { ...LAYOUT, offset: at } })).toEqual(VALUES);
  });

  it("of another length than the layout says are refused, longer ones too: they would be skewed", async () => {
    const path = await withSidecar(SIDECAR);
    await expect(openScan(path, { raw: { ...LAYOUT, size: sizeXyz(2, 3, 5) } })).rejects.toThrow(
      /expected 60 bytes \(0 before 2 x 3 x 5 voxels of uint16\), found 48 bytes/,
    );
    await expect(openScan(path, { raw: { ...LAYOUT, size: sizeXyz(2, 3, 3) } })).rejects.toThrow(
      /expected 36 bytes.*found 48 bytes/,
    );
  });

  it.each([
    [{ version: 2 }, /expected version 1, found 2/],
    [{ size: [2, 3] }, /size.*three whole numbers/],
    [{ size: [2, 3, 4.5] }, /size.*three whole numbers/],
    [{ dtype: "short" }, /dtype.*expected one of uint8/],
    [{ endian: "middle" }, /endian.*little or big/],
    [{ offset: -1 }, /offset.*whole number of bytes/],
    [{ spacing: [1, "x", 3] }, /spacing.*three numbers/],
    [{ unit: 5 }, /unit/],
    [{ ofset: 5 }, /found 'ofset'/],
    [{ file: "b.raw" }, /expected the name 'a\.raw', found 'b\.raw'/],
  ])("with a sidecar that says %j are refused by a clear sentence", async (more, sentence) => {
    await expect(openScan(await withSidecar({ ...SIDECAR, ...more }))).rejects.toThrow(sentence);
  });

  it("with a sidecar that is no JSON, or none at all, say what is needed", async () => {
    const path = await withSidecar(SIDECAR);
    await writeFile(`${path}.json`, `${JSON.stringify(SIDECAR).slice(0, -1)},}`);
    await expect(openScan(path)).rejects.toThrow(/a\.raw\.json: expected a sidecar in JSON/);
    await rm(`${path}.json`);
    await expect(openScan(path)).rejects.toThrow(/begins with.*Voxels without a header need a sidecar/);
  });

  it("with a mutated or truncated sidecar give a typed error or their values, never anything else", async () => {
    const path = await withSidecar(SIDECAR);
    const whole = Buffer.from(JSON.stringify({ ...SIDECAR, offset: 0, spacing: [40, 40, 40], unit: "um" }));
    const found = await fuzzFile({ path: `${path}.json`, open: path, whole, headerBytes: whole.length, turns: 100, seed: 2 });
    expect(found.refused).toBeGreaterThan(50);
    await writeFile(`${path}.json`, whole);
    expect(await voxelsOf(path)).toEqual(VALUES);
  });
});
