import { unreadable } from "#shared/errors.ts";
import { IDENTITY3, type Matrix3, type Vec3 } from "#shared/geometry/types.ts";
import { dot } from "#shared/geometry/vec3.ts";
import { float32AsWritten } from "#shared/volume/float32-as-written.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";
import { columnOf, unitColumns } from "#shared/volume/unit-columns.ts";

type Place = Omit<ScanHeader, "family" | "dtype" | "size">;

/** Codes of `xyzt_units`, its lowest three bits. 0 is "unknown": nothing is guessed from it. */
const UNITS: Readonly<Record<number, readonly [string, number]>> = { 1: ["m", 1000], 2: ["mm", 1], 3: ["um", 1e-3] };
/** How far two numbers of a header may differ, as a share, and still say the same. */
const SAME = 1e-4;

interface Affine {
  readonly direction: Matrix3;
  readonly lengths: Vec3;
  readonly origin: Vec3;
}

/**
 * Where the voxels of a NIfTI-1 scan lie: by the affine (`sform`) where its code is above 0, else by the quaternion (`qform`), else by
 * the spacing alone. Both give the place of a voxel's centre in RAS; x and y change sign on the way to LPS.
 * @throws unreadable-input for numbers that are not finite and directions that do not span space at right angles.
 * @source nifti1.h, methods 1 to 3 of its section on orientation (memory); checked against an independent reader.
 */
export function niftiPlace(view: DataView, little: boolean, file: string): Place {
  const float = (at: number) => view.getFloat32(at, little);
  const short = (at: number) => view.getInt16(at, little);
  const pixdim = [76, 80, 84, 88].map(float);
  const written: Vec3 = [float32AsWritten(pixdim[1]!), float32AsWritten(pixdim[2]!), float32AsWritten(pixdim[3]!)];
  const notes: string[] = [];
  const sform =
    short(254) > 0
      ? affineOf(
          [280, 296, 312].map((at) => [0, 4, 8, 12].map((k) => float(at + k))),
          file,
          "srow",
        )
      : null;
  const qform = short(252) > 0 ? quaternionAffine(view, little, pixdim, file) : null;
  const code = view.getUint8(123) & 7;
  const unit = UNITS[code];
  const factors: Vec3 | null = unit ? [unit[1], unit[1], unit[1]] : null;
  const base = { unit: unit ? unit[0] : code === 0 ? null : `code ${code}`, mmPerUnit: factors, originMmPerUnit: factors };
  const chosen = sform ?? qform;
  if (!chosen) return { ...base, headerSpacing: written, origin: [0, 0, 0], direction: IDENTITY3, frame: "scan", notes };
  const disagree = sform && qform && !sameDirections(sform.direction, qform.direction);
  if (disagree)
    notes.push("The header's two orientations (sform and qform) differ; sform is taken. Check that the scan is not mirrored.");
  let headerSpacing = written;
  if (sform && !written.every((s, k) => Math.abs(s - sform.lengths[k]!) <= SAME * sform.lengths[k]!)) {
    headerSpacing = [sform.lengths[0], sform.lengths[1], sform.lengths[2]].map((l) =>
      float32AsWritten(Math.fround(l)),
    ) as unknown as Vec3;
    notes.push(`The header's pixdim says ${written.join(", ")}, its affine ${headerSpacing.join(", ")}; the affine is taken.`);
  }
  const [x, y, z] = chosen.origin;
  return {
    ...base,
    headerSpacing,
    origin: [0 - float32AsWritten(x), 0 - float32AsWritten(y), float32AsWritten(z) + 0],
    direction: turned(chosen.direction),
    frame: "LPS",
    notes,
  };
}

function affineOf(rows: readonly (readonly number[])[], file: string, where: string): Affine {
  const column = (k: number): Vec3 => [rows[0]![k]!, rows[1]![k]!, rows[2]![k]!];
  const found = unitColumns(column(0), column(1), column(2));
  const origin = column(3);
  if (!found || !origin.every(Number.isFinite))
    throw unreadable(file, "an affine of finite numbers that spans space", rows.flat().join(" ").slice(0, 160), where);
  const [a, b, c] = ([0, 1, 2] as const).map((k) => columnOf(found.direction, k)) as [Vec3, Vec3, Vec3];
  if (Math.max(Math.abs(dot(a, b)), Math.abs(dot(b, c)), Math.abs(dot(a, c))) > 1e-3)
    throw unreadable(file, "axes at right angles", "a sheared affine", where, "Resample the scan to a straight grid.");
  return { ...found, origin };
}

/** The affine of `qform`: a rotation from a unit quaternion, the third axis turned round where `pixdim[0]` is negative. */
function quaternionAffine(view: DataView, little: boolean, pixdim: readonly number[], file: string): Affine {
  const float = (at: number) => view.getFloat32(at, little);
  let [b, c, d] = [float(256), float(260), float(264)];
  const square = b * b + c * c + d * d;
  if (!(square <= 1 + 1e-3)) throw unreadable(file, "a quaternion of at most length 1", [b, c, d].join(" "), "qform");
  const a = square >= 1 - 1e-7 ? 0 : Math.sqrt(1 - square);
  if (a === 0) [b, c, d] = [b / Math.sqrt(square), c / Math.sqrt(square), d / Math.sqrt(square)];
  const turn = pixdim[0]! < 0 ? -1 : 1;
  const rows = [
    [a * a + b * b - c * c - d * d, 2 * (b * c - a * d), turn * 2 * (b * d + a * c), float(268)],
    [2 * (b * c + a * d), a * a + c * c - b * b - d * d, turn * 2 * (c * d - a * b), float(272)],
    [2 * (b * d - a * c), 2 * (c * d + a * b), turn * (a * a + d * d - b * b - c * c), float(276)],
  ];
  return affineOf(rows, file, "qform");
}

function sameDirections(a: Matrix3, b: Matrix3): boolean {
  return a.every((value, k) => Math.abs(value - b[k]!) < 1e-3);
}

/** Rows x and y change sign: right becomes left, anterior becomes posterior. */
function turned(m: Matrix3): Matrix3 {
  return m.map((value, k) => (k < 6 ? 0 - value : value + 0)) as unknown as Matrix3;
}
