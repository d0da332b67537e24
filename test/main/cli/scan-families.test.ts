import { createHash } from "node:crypto";
import { mkdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { deflateSync, gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { dicomBytes } from "#test/main/intake/dicom/dicom-by-hand.ts";
import { niftiBytes } from "#test/main/intake/nifti/nifti-by-hand.ts";
import { bmpBytes, pngBytes } from "#test/main/intake/slice-folder/pictures-by-hand.ts";
import { tiffBytes } from "#test/main/intake/tiff-by-hand.ts";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";

// 10 x 11 x 12 voxels of 0.5 mm: sides of 5 mm and more, nothing to doubt once a unit is known.
const SIZE = [10, 11, 12] as const;
const [NX, NY, NZ] = SIZE;
const VALUES = Array.from({ length: NX * NY * NZ }, (_, k) => (k * 7919) % 251);
const slice = (z: number) => VALUES.slice(z * NX * NY, (z + 1) * NX * NY);
const DATA = bytesOf(VALUES, "uint16", true);
const sha256Of = (dtype: string) =>
  createHash("sha256")
    .update(bytesOf(VALUES, dtype, true))
    .digest("hex");
const meta = (more: readonly string[]) =>
  [
    "ObjectType = Image",
    "NDims = 3",
    "BinaryData = True",
    "BinaryDataByteOrderMSB = False",
    "Offset = 1 2 3",
    "AnatomicalOrientation = RAI",
    "ElementSpacing = 0.5 0.5 0.5",
    `DimSize = ${SIZE.join(" ")}`,
    "ElementType = MET_USHORT",
    ...more,
  ].join("\n");

/** Writes files into a fresh folder and gives its path. */
async function folderOf(files: Record<string, Uint8Array | string>): Promise<string> {
  const folder = join(await scratchFolder(), "scan");
  await mkdir(folder);
  for (const [name, bytes] of Object.entries(files)) await writeFile(join(folder, name), bytes);
  return folder;
}
const slices = (ending: string, write: (z: number) => Uint8Array) =>
  folderOf(Object.fromEntries(Array.from({ length: NZ }, (_, z) => [`rec${z + 1}.${ending}`, write(z)])));

interface Case {
  readonly path: () => Promise<string>;
  readonly family: string;
  readonly dtype: string;
  /** Warnings of `info`; those that leave the voxel size open make `intake` ask for it. */
  readonly codes: readonly string[];
  readonly flags?: readonly string[];
  readonly frame?: string;
  readonly origin?: readonly number[];
}

const LPS = { frame: "LPS", origin: [1, 2, 3] };
const CASES: Record<string, Case> = {
  "MetaImage without any unit": {
    path: async () =>
      join(await folderOf({ "a.mha": Buffer.concat([Buffer.from(`${meta(["ElementDataFile = LOCAL"])}\n`), DATA]) }), "a.mha"),
    family: "MetaImage",
    dtype: "uint16",
    codes: ["no-unit"],
    ...LPS,
  },
  "compressed MetaImage with a unit": {
    path: async () => {
      const head = Buffer.from(`${meta(["DistanceUnits = mm", "CompressedData = True", "ElementDataFile = LOCAL"])}\n`);
      return join(await folderOf({ "a.mha": Buffer.concat([head, deflateSync(DATA)]) }), "a.mha");
    },
    family: "MetaImage",
    dtype: "uint16",
    codes: [],
    ...LPS,
  },
  "detached MetaImage": {
    path: async () =>
      join(await folderOf({ "a.mhd": `${meta(["DistanceUnits = mm", "ElementDataFile = a.raw"])}\n`, "a.raw": DATA }), "a.mhd"),
    family: "MetaImage",
    dtype: "uint16",
    codes: [],
    ...LPS,
  },
  "gzip NIfTI-1 in RAS and micrometres": {
    path: async () => {
      // RAS: the first voxel is 1 to the left, 2 to posterior, 3 up; x runs to the left, y to posterior.
      const sform = [1, [-500, 0, 0, -1000, 0, -500, 0, -2000, 0, 0, 500, 3000]] as const;
      const bytes = niftiBytes({ sizes: SIZE, dtype: "uint16", values: VALUES, sform, pixdim: [1, 500, 500, 500], xyzt: 3 });
      return join(await folderOf({ "a.nii.gz": gzipSync(bytes) }), "a.nii.gz");
    },
    family: "NIfTI-1",
    dtype: "uint16",
    codes: [],
    ...LPS,
  },
  "NIfTI-1 with xyzt_units 0": {
    path: async () => {
      const bytes = niftiBytes({ sizes: SIZE, dtype: "uint16", values: VALUES, pixdim: [1, 0.5, 0.5, 0.5], xyzt: 0 });
      return join(await folderOf({ "a.nii": bytes }), "a.nii");
    },
    family: "NIfTI-1",
    dtype: "uint16",
    codes: ["no-unit", "no-frame"],
  },
  "BigTIFF without Z spacing": {
    path: async () => {
      const pages = Array.from({ length: NZ }, (_, z) => slice(z));
      const bytes = tiffBytes({ width: NX, height: NY, pages, dtype: "uint16", big: true, resolution: [20, 20, 3] });
      return join(await folderOf({ "a.tif": bytes }), "a.tif");
    },
    family: "TIFF",
    dtype: "uint16",
    codes: ["no-spacing", "no-frame"],
  },
  "folder of TIFF slices": {
    path: () => slices("tif", (z) => tiffBytes({ width: NX, height: NY, pages: [slice(z)], dtype: "uint16" })),
    family: "TIFF slices",
    dtype: "uint16",
    codes: ["no-unit", "no-spacing", "no-frame"],
  },
  "folder of PNG slices": {
    path: () => slices("png", (z) => pngBytes({ width: NX, height: NY, values: slice(z), filters: [4, 1] })),
    family: "PNG slices",
    dtype: "uint8",
    codes: ["no-unit", "no-spacing", "no-frame"],
  },
  "folder of BMP slices": {
    path: () => slices("bmp", (z) => bmpBytes({ width: NX, height: NY, values: slice(z) })),
    family: "BMP slices",
    dtype: "uint8",
    codes: ["no-unit", "no-spacing", "no-frame"],
  },
  "DICOM series": {
    path: () =>
      slices("dcm", (z) =>
        dicomBytes({
          columns: NX,
          rows: NY,
          dtype: "uint16",
          values: slice(z),
          position: `1\\2\\${3 + z * 0.5}`,
          pixelSpacing: "0.5\\0.5",
          more: [[0x18, 0x88, "DS", "7"]],
        }),
      ),
    family: "DICOM",
    dtype: "uint16",
    codes: [],
    ...LPS,
  },
  "raw voxels by flags": {
    path: async () =>
      join(await folderOf({ "a.vol": Buffer.concat([Buffer.alloc(9), bytesOf(VALUES, "uint16", false)]) }), "a.vol"),
    family: "raw",
    dtype: "uint16",
    codes: ["no-unit", "no-spacing", "no-frame"],
    flags: ["--raw-size", SIZE.join(","), "--raw-dtype", "uint16", "--raw-endian", "big", "--raw-offset", "9"],
  },
  "raw voxels with a sidecar": {
    path: async () => {
      const sidecar = {
        format: "tautline-raw",
        version: 1,
        size: SIZE,
        dtype: "uint16",
        endian: "little",
        spacing: [500, 500, 500],
        unit: "um",
      };
      return join(await folderOf({ "a.raw": DATA, "a.raw.json": JSON.stringify(sidecar) }), "a.raw");
    },
    family: "raw",
    dtype: "uint16",
    codes: ["no-frame"],
  },
};

describe("info and intake", () => {
  it.each(Object.entries(CASES))(
    "read a %s",
    async (_, { path, family, dtype, codes, flags = [], frame = "scan", origin = [0, 0, 0] }) => {
      const file = await path();
      const info = await runVerb(["info", file, "--json", ...flags]);
      expect(info.code, info.stderr).toBe(0);
      const said = JSON.parse(info.stdout);
      expect(info.stderr.includes("Spacing Between Slices, 7 mm, is not used")).toBe(family === "DICOM");
      const settled = !codes.some((code) => code !== "no-frame");
      expect(said).toMatchObject({ family, dtype, size: SIZE, frame, spacing: settled ? [0.5, 0.5, 0.5] : null });
      expect(said.range).toEqual({ min: 0, max: 250, sampled: false });
      expect(said.warnings.map((w: { code: string }) => w.code)).toEqual(codes);

      const library = join(await scratchFolder(), "library");
      const intake = ["intake", file, "--library", library, "--json", ...flags];
      let taken = await runVerb(intake);
      if (!settled) {
        expect(taken).toMatchObject({ code: 2, stdout: "" });
        expect(taken.stderr).toMatch(/--spacing sx,sy,sz --unit um/);
        taken = await runVerb([...intake, "--spacing", "500", "--unit", "um"]);
      }
      expect(taken.code, taken.stderr).toBe(0);
      const answer = JSON.parse(taken.stdout);
      expect(answer.sha256).toBe(sha256Of(dtype));
      const text = await readFile(join(library, "specimens", answer.specimen, "specimen.json"), "utf8");
      const record = parseSpecimenRecord(JSON.parse(text), "specimen.json");
      expect(record.source.family).toBe(family);
      expect(record.volume).toMatchObject({ size: SIZE, spacing: [0.5, 0.5, 0.5], frame });
      for (const [axis, value] of origin.entries()) expect(record.volume.origin[axis]).toBeCloseTo(value, 6);
      expect(record.conversions.join()).toMatch(family === "DICOM" ? /Spacing Between Slices, 7 mm, is not used/ : /^$/);
    },
  );

  it("end with 2 and one sentence where a DICOM slice is missing, and leave nothing behind", async () => {
    const folder = await slices("dcm", (z) =>
      dicomBytes({ columns: NX, rows: NY, dtype: "uint16", values: slice(z), position: `0\\0\\${z < 5 ? z : z + 1}` }),
    );
    const library = join(await scratchFolder(), "library");
    for (const args of [
      ["info", folder],
      ["intake", folder, "--library", library],
    ]) {
      const { code, stdout, stderr } = await runVerb([...args, "--json"]);
      expect([code, stdout]).toEqual([2, ""]);
      expect(stderr).toMatch(/a gap of 2 mm \(1 missing\) between slice 5 and the next: rec5\.dcm at 4 mm and rec6\.dcm at 6 mm/);
      expect(stderr.trim().split("\n")).toHaveLength(1);
    }
    await expect(readFile(join(library, "specimens"))).rejects.toMatchObject({ code: "ENOENT" });
  });

  it.each([
    [["--raw-size", "2,3,4"], /--raw-size needs --raw-size and --raw-dtype/],
    [["--raw-size", "2,3", "--raw-dtype", "uint8"], /three whole numbers such as 2000,2000,1000/],
    [["--raw-size", "2,3,4", "--raw-dtype", "short"], /--raw-dtype must be uint8 or/],
    [["--raw-size", "2,3,4", "--raw-dtype", "uint16"], /needs --raw-endian/],
    [["--raw-size", "2,3,4", "--raw-dtype", "uint8", "--raw-offset", "-1"], /--raw-offset must be a whole number/],
  ])("refuse the raw flags %j by a clear sentence", async (flags, sentence) => {
    const file = join(await folderOf({ "a.raw": new Uint8Array(24) }), "a.raw");
    const { code, stdout, stderr } = await runVerb(["info", file, ...flags]);
    expect([code, stdout]).toEqual([2, ""]);
    expect(stderr).toMatch(sentence);
  });

  it("describe the raw flags and the sidecar in their help", async () => {
    for (const verb of ["info", "intake"]) {
      const { stdout } = await runVerb([verb, "--help"]);
      for (const flag of ["--raw-size", "--raw-dtype", "--raw-endian", "--raw-offset"]) expect(stdout).toContain(flag);
      expect(stdout).toContain('"format": "tautline-raw"');
    }
  });
});
