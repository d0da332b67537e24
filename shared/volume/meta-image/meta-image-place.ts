import { unreadable } from "#shared/errors.ts";
import { IDENTITY3, type Matrix3, type Vec3 } from "#shared/geometry/types.ts";
import { dot } from "#shared/geometry/vec3.ts";
import { mmPerUnit } from "#shared/volume/length-unit.ts";
import { quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";
import { columnOf, unitColumns } from "#shared/volume/unit-columns.ts";

type Fields = ReadonlyMap<string, string>;
type Place = Omit<ScanHeader, "family" | "dtype" | "size">;

/** Where an axis points that begins at the letter's side, in LPS: one from Right runs towards left. */
const TOWARDS: Readonly<Record<string, Vec3>> = {
  R: [1, 0, 0],
  L: [-1, 0, 0],
  A: [0, 1, 0],
  P: [0, -1, 0],
  I: [0, 0, 1],
  S: [0, 0, -1],
};

/**
 * Where the voxels of a MetaImage lie. `Offset` is the centre of the first voxel; each row of `TransformMatrix` is the direction of one
 * index axis. The format's common practice takes millimetres; here a unit is only what `DistanceUnits` says. The frame is LPS when
 * `AnatomicalOrientation` names the axes' directions and agrees with the matrix.
 * @throws unreadable-input for ill-formed numbers and directions that do not span space.
 * @source MetaIO's description of its headers (memory); rows, centre and letters checked against files that ITK writes.
 */
export function placeOfMetaImage(fields: Fields, axes: number, file: string): Place {
  const numbers = (names: readonly string[], count: number): number[] | null => {
    for (const name of names) {
      const text = fields.get(name.toLowerCase());
      if (text === undefined) continue;
      const words = text.split(/\s+/);
      if (words.length !== count) throw unreadable(file, `${count} numbers`, `${words.length}`, name);
      return words.map((word) => numberOf(word, file, name));
    }
    return null;
  };
  const spacing = numbers(["ElementSpacing"], axes);
  const matrix = numbers(["TransformMatrix", "Rotation", "Orientation"], axes * axes);
  const offset = numbers(["Offset", "Position", "Origin"], axes) ?? [0, 0, 0];
  if (!offset.every(Number.isFinite)) throw unreadable(file, "a place of finite numbers", offset.join(" "), "Offset");
  const direction = matrix ? directionOf(matrix, axes, file) : IDENTITY3;
  const letters = (fields.get("anatomicalorientation") ?? "").toUpperCase();
  const agreement = compareLetters(letters, direction);
  const notes: string[] = [];
  if (agreement === "differs")
    notes.push(
      `The header's AnatomicalOrientation '${letters}' contradicts its TransformMatrix; the frame is left open. Check that the scan is not mirrored.`,
    );
  const word = fields.get("distanceunits");
  const unit = word === undefined || word === "" || word === "?" ? null : word;
  const mm = mmPerUnit(unit);
  const factors: Vec3 | null = mm === null ? null : [mm, mm, mm];
  const place: Place = {
    headerSpacing: spacing ? [spacing[0]!, spacing[1]!, spacing[2]!] : null,
    unit,
    mmPerUnit: factors,
    origin: [offset[0]! + 0, offset[1]! + 0, offset[2]! + 0],
    originMmPerUnit: factors,
    direction,
    frame: agreement === "agrees" ? "LPS" : "scan",
    notes,
  };
  if (spacing || !fields.has("elementsize")) return place;
  const spacingRemark = `The header gives ElementSize ${fields.get("elementsize")!.slice(0, 60)}, the size of a sample, but no ElementSpacing, the distance between voxels.`;
  return { ...place, spacingRemark };
}

function directionOf(matrix: readonly number[], axes: number, file: string): Matrix3 {
  const row = (k: number): Vec3 => [matrix[k * axes]!, matrix[k * axes + 1]!, matrix[k * axes + 2]!];
  const found = unitColumns(row(0), row(1), row(2));
  if (!found) throw unreadable(file, "three directions that span space", matrix.join(" ").slice(0, 120), "TransformMatrix");
  if (found.lengths.some((l) => Math.abs(l - 1) > 1e-3))
    throw unreadable(file, "directions of length 1", found.lengths.join(", "), "TransformMatrix");
  return found.direction;
}

function compareLetters(letters: string, direction: Matrix3): "agrees" | "differs" | "unsaid" {
  const towards = Array.from(letters, (letter) => TOWARDS[letter]);
  if (towards.length !== 3 || towards.some((v) => v === undefined)) return "unsaid";
  const same = ([0, 1, 2] as const).every((k) => dot(columnOf(direction, k), towards[k]!) > 0.4);
  return same ? "agrees" : "differs";
}

function numberOf(word: string, file: string, where: string): number {
  if (word.length > 64) throw unreadable(file, "numbers", quote(word), where);
  const value = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d{1,4})?$|^[+-]?(nan|inf(inity)?)$/i.test(word) ? Number(word) : null;
  if (value === null) throw unreadable(file, "numbers", quote(word), where);
  return value;
}
