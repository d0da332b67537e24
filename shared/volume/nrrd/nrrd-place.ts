import { unreadable } from "#shared/errors.ts";
import { IDENTITY3, type Matrix3, type Vec3 } from "#shared/geometry/types.ts";
import { norm } from "#shared/geometry/vec3.ts";
import { mmPerUnit } from "#shared/volume/length-unit.ts";
import { quote } from "#shared/volume/nrrd/nrrd-fields.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

type Fields = ReadonlyMap<string, string>;
type Place = Pick<
  ScanHeader,
  "headerSpacing" | "unit" | "mmPerUnit" | "origin" | "originMmPerUnit" | "direction" | "frame" | "notes"
>;

/** Signs that turn the named space's axes to left, posterior, superior. `space dimension: 3` names no space. */
const TO_LPS: Readonly<Record<string, Vec3>> = {
  "right-anterior-superior": [-1, -1, 1],
  ras: [-1, -1, 1],
  "left-anterior-superior": [1, -1, 1],
  las: [1, -1, 1],
  "left-posterior-superior": [1, 1, 1],
  lps: [1, 1, 1],
};
/** Three-dimensional spaces that say nothing about a patient. */
const OTHER_SPACES = ["scanner-xyz", "3d-right-handed", "3d-left-handed"];
const NOT_SPACE_KINDS =
  /^(list|point|vector|covariant-vector|normal|stub|scalar|complex|2-vector|3-|4-|rgb|hsv|xyz|quaternion|2d-|3d-|time)/;

/**
 * Which three axes of an NRRD are space, and where its voxels lie. `space origin` is the centre of the first voxel whatever the
 * centering; without a space, `axis mins` of a cell-centred axis is the voxel's outer face, half a voxel before its centre.
 * `measurement frame` turns vectors, not places, and is ignored.
 * @throws unreadable-input when it cannot be told, or a vector is ill-formed.
 * @source NRRD file format definition, sections 5 and 6 (per-axis fields, orientation).
 */
export function placeOfNrrd(fields: Fields, dimension: number, file: string): { axes: [number, number, number]; scan: Place } {
  const kinds = fields.get("kinds")?.toLowerCase().split(/\s+/);
  const vectors = fields.has("spacedirections") ? vectorsOf(fields.get("spacedirections")!, file, "space directions") : null;
  if (vectors && vectors.length !== dimension)
    throw unreadable(file, `${dimension} space directions`, `${vectors.length}`, "space directions");
  const axes: number[] = [];
  for (let axis = 0; axis < dimension; axis++) {
    const aside = vectors ? vectors[axis] === null : NOT_SPACE_KINDS.test(kinds?.[axis] ?? "");
    if (!aside) axes.push(axis);
  }
  if (axes.length !== 3) throw unreadable(file, "three axes of space", `${axes.length}`, "dimension, kinds, space directions");
  const [x, y, z] = axes as [number, number, number];
  const found = vectors
    ? orientedPlace(fields, [vectors[x]!, vectors[y]!, vectors[z]!], file)
    : axisPlace(fields, dimension, [x, y, z], file);
  return { axes: [x, y, z], scan: found };
}

/** With `space directions`: spacing and direction from the vectors, units of the space's own axes. */
function orientedPlace(fields: Fields, columns: [Vec3, Vec3, Vec3], file: string): Place {
  const space = fields.get("space")?.toLowerCase();
  const known = space === undefined || Object.hasOwn(TO_LPS, space) || OTHER_SPACES.includes(space);
  if (!known) throw unreadable(file, "a three-dimensional space without time", quote(space ?? ""), "space");
  const signs = space !== undefined && Object.hasOwn(TO_LPS, space) ? TO_LPS[space]! : null;
  const flip = (v: Vec3): Vec3 => (signs ? [v[0] * signs[0] + 0, v[1] * signs[1] + 0, v[2] * signs[2] + 0] : v);
  const originText = fields.get("spaceorigin");
  const origins = originText === undefined ? [[0, 0, 0] as Vec3] : vectorsOf(originText, file, "space origin");
  const written = origins[0] ?? null;
  const usable = written?.every(Number.isFinite) ? written : null;
  const notes: string[] = [];
  if (!usable) notes.push("The header's space origin is no place; the first voxel is put at 0, 0, 0.");
  if (space === "3d-left-handed") notes.push("The header names a left-handed space; check that the scan is not mirrored.");
  const lengths = columns.map((v) => norm(v)) as unknown as Vec3;
  const good = lengths.every((l) => Number.isFinite(l) && l > 0);
  const units = fields.has("spaceunits") ? wordsOf(fields.get("spaceunits")!) : null;
  const factors = units?.length === 3 ? units.map(mmPerUnit) : null;
  const mm = factors?.every((f) => f !== null) ? (factors as unknown as Vec3) : null;
  const base = { frame: signs ? "LPS" : "scan", notes } as const;
  const direction = good
    ? matrixOf(columns.map((v, k) => flip([v[0] / lengths[k]!, v[1] / lengths[k]!, v[2] / lengths[k]!])))
    : IDENTITY3;
  if (good && Math.abs(determinant(direction)) < 1e-3)
    throw unreadable(file, "space directions that span space", "directions in one plane", "space directions");
  const origin = flip(usable ?? [0, 0, 0]);
  const unit = units === null ? null : sameWord(units);
  if (mm && (mm[0] !== mm[1] || mm[1] !== mm[2]) && good) {
    // A space whose axes have different units: only the vectors in millimetres have a length.
    const scaled = columns.map((v) => [v[0] * mm[0], v[1] * mm[1], v[2] * mm[2]] as Vec3);
    const sizes = scaled.map((v) => norm(v)) as unknown as Vec3;
    const turned = scaled.map((v, k) => flip([v[0] / sizes[k]!, v[1] / sizes[k]!, v[2] / sizes[k]!]));
    const note = `The header's axes have different units (${unit}); they are turned to millimetres.`;
    return {
      ...base,
      headerSpacing: sizes,
      unit,
      mmPerUnit: [1, 1, 1],
      origin,
      originMmPerUnit: mm,
      direction: matrixOf(turned),
      notes: [...notes, note],
    };
  }
  return { ...base, headerSpacing: lengths, unit, mmPerUnit: mm, origin, originMmPerUnit: mm, direction };
}

/** Without a space: spacings (or axis mins and maxs) and units per axis. */
function axisPlace(fields: Fields, dimension: number, axes: readonly [number, number, number], file: string): Place {
  const numbers = (name: string, title: string): (number | undefined)[] | null => {
    const words = fields.get(name)?.split(/\s+/);
    if (!words) return null;
    if (words.length !== dimension) throw unreadable(file, `${dimension} numbers`, `${words.length}`, title);
    return axes.map((axis) => numberOf(words[axis]!, file, title));
  };
  const sizes = numbers("sizes", "sizes")!;
  const spacings = numbers("spacings", "spacings");
  const mins = numbers("axismins", "axis mins");
  const maxs = numbers("axismaxs", "axis maxs");
  const centres = fields.get("centerings")?.toLowerCase().split(/\s+/);
  const isCell = (k: number) => centres?.[axes[k]!] !== "node";
  const thickness = fields.get("thicknesses");
  const step = (k: number): number => {
    const given = spacings?.[k];
    if (given !== undefined && !Number.isNaN(given)) return given;
    const span = (maxs?.[k] ?? Number.NaN) - (mins?.[k] ?? Number.NaN);
    return span / (isCell(k) ? sizes[k]! : sizes[k]! - 1);
  };
  const spacing: Vec3 = [step(0), step(1), step(2)];
  const missing = spacing.some(Number.isNaN);
  const origin = [0, 1, 2].map((k) => {
    const min = mins?.[k];
    return min === undefined || !Number.isFinite(min) || missing ? 0 : min + (isCell(k) ? spacing[k]! / 2 : 0);
  }) as unknown as Vec3;
  const units = fields.has("units") ? wordsOf(fields.get("units")!) : null;
  const chosen = units && axes.every((axis) => axis < units.length) ? axes.map((axis) => units[axis]!) : null;
  const factors = chosen?.map(mmPerUnit);
  const mm = factors?.every((f) => f !== null) ? (factors as unknown as Vec3) : null;
  const notes = thickness ? ["The header's slice thickness is not used; only the distance of slices counts."] : [];
  const unit = chosen ? sameWord(chosen) : null;
  return {
    headerSpacing: missing ? null : spacing,
    unit,
    mmPerUnit: mm,
    origin,
    originMmPerUnit: mm,
    direction: IDENTITY3,
    frame: "scan",
    notes,
  };
}

function vectorsOf(text: string, file: string, where: string): (Vec3 | null)[] {
  const parts = text.match(/none|\([^()]*\)/gi) ?? [];
  if (text.replaceAll(/none|\([^()]*\)/gi, "").trim() !== "")
    throw unreadable(file, "vectors such as (0.04,0,0)", quote(text), where);
  return parts.map((part) => {
    if (part.toLowerCase() === "none") return null;
    const numbers = part
      .slice(1, -1)
      .split(",")
      .map((word) => numberOf(word, file, where));
    if (numbers.length !== 3) throw unreadable(file, "vectors of three numbers", quote(part), where);
    return numbers as unknown as Vec3;
  });
}

function numberOf(word: string, file: string, where: string): number {
  const plain = word.trim().toLowerCase();
  if (/^[+-]?nan$/.test(plain)) return Number.NaN;
  if (/^[+-]?inf(inity)?$/.test(plain)) return plain.startsWith("-") ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  if (plain.length > 64 || !/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/.test(plain))
    throw unreadable(file, "a number", quote(word), where);
  return Number(plain);
}

/** Words in double quotes, or bare ones as some writers leave them. */
function wordsOf(text: string): string[] {
  return Array.from(text.matchAll(/"((?:[^"\\]|\\.)*)"|(\S+)/g), (match) => match[1] ?? match[2] ?? "");
}

function sameWord(words: readonly string[]): string | null {
  const distinct = [...new Set(words.map((word) => word.trim()))];
  const text = distinct.join(", ").slice(0, 80);
  return text === "" || text === "???" ? null : text;
}

function matrixOf(columns: readonly Vec3[]): Matrix3 {
  const [a, b, c] = columns as readonly [Vec3, Vec3, Vec3];
  return [a[0], b[0], c[0], a[1], b[1], c[1], a[2], b[2], c[2]];
}

function determinant(m: Matrix3): number {
  return m[0] * (m[4] * m[8] - m[5] * m[7]) - m[1] * (m[3] * m[8] - m[5] * m[6]) + m[2] * (m[3] * m[7] - m[4] * m[6]);
}
