import { unreadable } from "#shared/errors.ts";
import { sizeXyz, type Vec3 } from "#shared/geometry/types.ts";
import { cross, dot, norm, normalise, subtract } from "#shared/geometry/vec3.ts";
import type { DicomSlice } from "#shared/volume/dicom/dicom-slice.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";
import { matrixOfColumns } from "#shared/volume/unit-columns.ts";

interface Placed<T extends DicomSlice> {
  readonly slice: T;
  readonly position: Vec3;
  /** Along the normal, millimetres. */
  readonly height: number;
}

/** How far directions and spacings of two slices may differ, as a share. */
const SAME = 1e-4;
/** A slice may stand off its regular place by this share of the distance of slices. */
const MOST_UNEVEN = 0.1;

/**
 * The slices of a series in order, and the scan they make. Order and distance come from Image Position (Patient) along the slices' normal
 * and from nothing else: not from names, instance numbers, slice thickness or Spacing Between Slices.
 * @throws unreadable-input when slices differ, lack a place, share one, are shifted sideways or uneven, or one is missing (the gap is named).
 * @source DICOM PS3.3 C.7.6.2.1.1 (positions are voxel centres, LPS, millimetres).
 */
export function orderSeries<T extends DicomSlice>(
  slices: readonly T[],
  name: string,
): { slices: readonly T[]; scan: ScanHeader } {
  const [first] = slices;
  if (!first || slices.length < 2) throw unreadable(name, "a series of two or more slices", `${slices.length}`);
  for (const slice of slices) refuseOdd(slice, first);
  const { alongRow, alongColumn } = first;
  const missing = "Save the series again with its positions, or as another format whose slices have numbers.";
  if (!alongRow || !alongColumn) throw unreadable(first.file, "an Image Orientation (Patient)", "none", undefined, missing);
  const normal = normalise(cross(alongRow, alongColumn));
  const placed = slices.map((slice): Placed<T> => {
    const { position } = slice;
    if (!position) throw unreadable(slice.file, "an Image Position (Patient)", "none", undefined, missing);
    return { slice, position, height: dot(position, normal) };
  });
  placed.sort((a, b) => a.height - b.height);
  const step = regularStep(placed);
  refuseSideways(placed, normal, step);
  const lowest = placed[0]!;
  const { spacing } = first;
  const scan: ScanHeader = {
    family: "DICOM",
    dtype: first.dtype,
    size: sizeXyz(first.columns, first.rows, slices.length),
    headerSpacing: spacing ? [spacing[0], spacing[1], step] : null,
    unit: "mm",
    mmPerUnit: [1, 1, 1],
    origin: [lowest.position[0] + 0, lowest.position[1] + 0, lowest.position[2] + 0],
    originMmPerUnit: [1, 1, 1],
    direction: matrixOfColumns(normalise(alongRow), normalise(alongColumn), normal),
    frame: "LPS",
    notes: notesOf(placed, step),
    ...(spacing ? {} : { spacingRemark: `The slices are ${step} mm apart; the header gives no Pixel Spacing within a slice.` }),
  };
  return { slices: placed.map((p) => p.slice), scan };
}

/** Distance of neighbouring slices, from the first to the last; rounded where positions were written in decimals. */
function regularStep<T extends DicomSlice>(placed: readonly Placed<T>[]): number {
  const steps = placed.slice(1).map((p, k) => p.height - placed[k]!.height);
  const sorted = [...steps].sort((a, b) => a - b);
  // The lower median: half of the slices may be missing and the true distance is still found.
  const usual = sorted[Math.floor((sorted.length - 1) / 2)]!;
  const pair = (k: number) =>
    `${placed[k]!.slice.file} at ${mm(placed[k]!.height)} and ${placed[k + 1]!.slice.file} at ${mm(placed[k + 1]!.height)}`;
  const twice = steps.findIndex((step) => !(step > 0.25 * usual) || step <= 0);
  if (twice >= 0)
    throw unreadable(
      placed[twice + 1]!.slice.file,
      "slices at places of their own",
      `two ${mm(steps[twice]!)} apart: ${pair(twice)}`,
      "Image Position (Patient)",
      "Keep one time point or reconstruction in the folder.",
    );
  const gap = steps.findIndex((step) => step > 1.5 * usual);
  if (gap >= 0) {
    const lost = Math.round(steps[gap]! / usual) - 1;
    throw unreadable(
      placed[gap + 1]!.slice.file,
      `slices ${mm(usual)} apart`,
      `a gap of ${mm(steps[gap]!)} (${lost} missing) between slice ${gap + 1} and the next: ${pair(gap)}`,
      "Image Position (Patient)",
      "Find the missing file and put it in the folder.",
    );
  }
  const mean = (placed.at(-1)!.height - placed[0]!.height) / steps.length;
  const off = placed.findIndex((p, k) => Math.abs(p.height - placed[0]!.height - k * mean) > MOST_UNEVEN * mean);
  if (off >= 0)
    throw unreadable(
      placed[off]!.slice.file,
      `slices evenly ${mm(mean)} apart`,
      `one at ${mm(placed[off]!.height)}, off its place by more than a tenth of that`,
      "Image Position (Patient)",
      "Resample the series to even distances.",
    );
  return Number(mean.toPrecision(9));
}

/** Slices must stand over each other: a tilted gantry shifts them, and the scan would be skewed. */
function refuseSideways<T extends DicomSlice>(placed: readonly Placed<T>[], normal: Vec3, step: number): void {
  const start = placed[0]!.position;
  const pitch = Math.min(...(placed[0]!.slice.spacing ?? [step, step]), step);
  for (const { slice, position, height } of placed) {
    const rise = height - placed[0]!.height;
    const aside = norm(subtract(subtract(position, start), [normal[0] * rise, normal[1] * rise, normal[2] * rise]));
    if (aside > Math.max(0.5 * pitch, 1e-3 * rise))
      throw unreadable(
        slice.file,
        "slices straight above each other",
        `one shifted sideways by ${mm(aside)}`,
        "Image Position (Patient)",
        "Resample the series to a straight grid.",
      );
  }
}

function refuseOdd(slice: DicomSlice, first: DicomSlice): void {
  const words = (s: DicomSlice) => `${s.columns} x ${s.rows} ${s.dtype} of ${s.bitsStored} bits`;
  if (words(slice) !== words(first)) throw unreadable(slice.file, `${words(first)} as in ${first.file}`, words(slice));
  const numbers = (s: DicomSlice) => [...(s.alongRow ?? []), ...(s.alongColumn ?? [])];
  const [own, other] = [numbers(slice), numbers(first)];
  if (own.length !== other.length || own.some((value, k) => Math.abs(value - other[k]!) > SAME))
    throw unreadable(slice.file, `the orientation of ${first.file}`, own.join("\\") || "none", "Image Orientation (Patient)");
  const spacings = (s: DicomSlice) => s.spacing?.join("\\") ?? "none";
  const near = slice.spacing?.every((value, k) => Math.abs(value - (first.spacing?.[k] ?? Number.NaN)) <= SAME * Math.abs(value));
  if (spacings(slice) !== spacings(first) && !near)
    throw unreadable(slice.file, `the Pixel Spacing of ${first.file}, ${spacings(first)}`, spacings(slice), "Pixel Spacing");
}

function notesOf<T extends DicomSlice>(placed: readonly Placed<T>[], step: number): string[] {
  const { betweenSlices, inverted } = placed[0]!.slice;
  const notes: string[] = [];
  if (betweenSlices !== null && Math.abs(betweenSlices - step) > 1e-3 * step)
    notes.push(
      `The header's Spacing Between Slices, ${betweenSlices} mm, is not used: by their positions slices are ${step} mm apart.`,
    );
  const rescales = new Set(placed.map((p) => p.slice.rescale?.join(", ") ?? "none"));
  if (rescales.size > 1)
    notes.push("The header's rescale differs from slice to slice and is not applied; grey values of slices do not compare.");
  else if (!rescales.has("none"))
    notes.push(`The header's rescale (slope, intercept ${[...rescales][0]}) is not applied; values are kept as stored.`);
  if (inverted) notes.push("The header calls the least value white; values are kept as they are.");
  return notes;
}

function mm(value: number): string {
  return `${Number(value.toPrecision(6))} mm`;
}
