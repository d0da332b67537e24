import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import type { ScanLookAnswer } from "#shared/api/routes.ts";
import type { PassSummary, ShelfSpecimen, SpecimenRecord } from "#shared/api/specimen.ts";
import type { StudiesAnswer } from "#shared/api/study.ts";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";

export function specimenOf(id: string, change: Partial<SpecimenRecord> = {}): SpecimenRecord {
  return {
    format: "tautline-specimen",
    version: 1,
    id,
    name: "HB-07",
    created: 1_780_000_000_000,
    synthetic: true,
    source: { name: "HB-07", family: "generated", bytes: 60_000_000, dtype: "uint16" },
    volume: {
      sha256: "00",
      dtype: "uint16",
      size: sizeXyz(1040, 1040, 1310),
      spacing: spacingMm(0.04, 0.04, 0.04),
      origin: pointMm(0, 0, 0),
      direction: IDENTITY3,
      frame: "LPS",
      handedness: "confirmed",
      blurFwhmMm: 0.08,
      range: { min: 0, max: 4095 },
    },
    conversions: [],
    polarity: "bright",
    display: { low: 0, high: 4095 },
    facts: { species: "porcine valve", fixation: "fixed under load", medium: "air", pressure: 100, state: "closed" },
    landmarks: {},
    ...change,
  };
}

export function passOf(specimen: string, annotator: string, change: Partial<PassSummary> = {}): PassSummary {
  return {
    id: `${specimen}-${annotator}`.toLowerCase(),
    specimen,
    annotator,
    number: 1,
    state: "under-way",
    trees: 14,
    openEnds: 3,
    doubts: 2,
    edits: 1204,
    workMs: 130 * 60_000,
    changed: 1_780_400_000_000,
    synthetic: false,
    ...change,
  };
}

export function shelfOfTwo(): ShelfSpecimen[] {
  const plain = specimenOf("b2", {
    name: "K-112 right after fixation, second scan with the long name",
    synthetic: false,
    facts: {},
    volume: { ...specimenOf("b2").volume, spacing: spacingMm(0.0325, 0.0325, 0.05), handedness: "unknown" },
  });
  return [
    {
      specimen: specimenOf("a1"),
      passes: [
        passOf("a1", "AN-1", { synthetic: true, state: "finished", openEnds: 0 }),
        passOf("a1", "AN-2", { synthetic: true, state: "finished", openEnds: 0, doubts: 1 }),
        passOf("a1", "MK", { trees: 1, edits: 0, workMs: 0, openEnds: 0, doubts: 0 }),
      ],
      incomplete: false,
    },
    { specimen: plain, passes: [], incomplete: true },
  ];
}

/** A grey disc with a few dots, as the middle slice of a scan; asymmetric, so that a mirror image can be told. */
export function sliceOf(side: number): { width: number; height: number; grey: Uint8Array } {
  const grey = new Uint8Array(side * side);
  for (let i = 0; i < grey.length; i++) {
    const x = (i % side) / side - 0.5;
    const y = Math.floor(i / side) / side - 0.5;
    const ring = Math.abs(Math.hypot(x, y) - 0.36) < 0.02;
    const dot =
      Math.hypot(x - 0.15, y + 0.1) < 0.03 || Math.hypot(x - 0.05, y - 0.18) < 0.02 || Math.hypot(x - 0.2, y - 0.02) < 0.015;
    grey[i] = (ring ? 120 : dot ? 225 : 38) + ((i * 7919) % 13);
  }
  return { width: side, height: side, grey };
}

/** Three projections of the made-up scan of 1040 x 1040 x 1310 voxels. */
export function projectionsOf(): ProjectionsAnswer {
  const picture = (height: number) => {
    const { grey } = sliceOf(208);
    const tall = Uint8Array.from(
      { length: 208 * height },
      (_, i) => grey[Math.floor((Math.floor(i / 208) * 208) / height) * 208 + (i % 208)]!,
    );
    return {
      width: 208,
      height,
      data: btoa(String.fromCharCode(...tall.subarray(0, 40_000)) + String.fromCharCode(...tall.subarray(40_000))),
    };
  };
  const packing = { ratio: 0.71, unpackMs: 0.5, packedBytesPerSecond: 6e7, bricks: 108 };
  return { alongZ: picture(208), alongY: picture(262), alongX: picture(262), slices: 124, of: 1310, packing };
}

/** What some made-up scans have besides. */
export function extrasOf(path: string): Partial<ScanLookAnswer> {
  if (path.includes("several-store")) return { readings: { channels: 3, times: 200 }, inPlace: { fits: true } };
  if (path.includes("several")) return { readings: { channels: 3, times: 1 } };
  if (path.includes("store")) return { inPlace: { fits: true } };
  if (path.includes("zstd"))
    return {
      inPlace: { fits: false, why: "its chunks are packed with zstd; plain ones, gzip, zlib and blosc with LZ4 can be read." },
    };
  return {};
}

/** @param settled whether the header gives a voxel size with a unit */
export function lookOf(settled: boolean): ScanLookAnswer {
  const { width, height, grey } = sliceOf(256);
  let text = "";
  for (const value of grey) text += String.fromCharCode(value);
  return {
    info: {
      family: "NRRD",
      name: "K-113.nrrd",
      bytes: 2_834_000_000,
      size: [1040, 1040, 1310],
      spacing: settled ? [0.04, 0.04, 0.04] : null,
      headerSpacing: [40, 40, 40],
      unit: settled ? "um" : null,
      dtype: "uint32",
      range: { min: 0, max: 4095, sampled: true },
      frame: "scan",
      warnings: settled ? [] : [{ code: "no-unit", message: "The header names no unit of length." }],
    },
    slice: { width, height, data: btoa(text) },
    histogram: {
      min: 0,
      max: 4095,
      counts: Array.from({ length: 64 }, (_, i) =>
        Math.round(90_000 * Math.exp(-((i - 9) ** 2) / 30) + 900 * Math.exp(-((i - 45) ** 2) / 50)),
      ),
    },
    conversions: ["The voxels are uint32 and are stored as uint16, which holds every value exactly."],
    suggestedPolarity: "bright",
  };
}

/** A study that is led here and two assignments that were taken in, one of them handed back. */
export function studiesOfTwo(): StudiesAnswer {
  const assignment = { specimen: "a1", code: "K7Q2", pass: "a1-pass", passState: "under-way", taken: 1_780_300_000_000 } as const;
  return {
    studies: [
      {
        id: "st1",
        name: "Harrow Bay agreement",
        created: 1_780_000_000_000,
        specimens: 5,
        annotators: 3,
        protocol: { version: 1, frozen: true },
        counts: { planned: 30, out: 2, returned: 4 },
      },
    ],
    assignments: [
      { ...assignment, state: "under-way" },
      { ...assignment, specimen: "a2", code: "M3XD", pass: "a2-pass", state: "returned" },
    ],
    problems: [],
  };
}
