import type { Vec3 } from "#shared/geometry/types.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

const TYPE_WORDS: Readonly<Record<StoredDtype, string>> = { uint8: "uint8", uint16: "uint16", int16: "int16", float32: "float" };

/**
 * Header of an attached NRRD file with its closing empty line; the voxels follow, x fastest, little-endian. LPS grids name
 * their space and millimetres; grids in the scan's own frame name an unspecific space of three axes.
 * @param comments one line each, without line breaks.
 * @source NRRD file format definition, NRRD0004.
 */
export function nrrdHeaderText(
  grid: VolumeGrid,
  dtype: StoredDtype,
  encoding: "raw" | "gzip",
  comments: readonly string[] = [],
): string {
  const { size, spacing, origin, direction: d, frame } = grid;
  const axis = (k: number): Vec3 => [d[k]! * spacing[k]!, d[3 + k]! * spacing[k]!, d[6 + k]! * spacing[k]!];
  const vector = (v: Vec3) => `(${v.map((value) => String(value + 0)).join(",")})`;
  const lines = [
    "NRRD0004",
    ...comments.map((comment) => `# ${comment.replace(/[\r\n]+/g, " ")}`),
    `type: ${TYPE_WORDS[dtype]}`,
    "dimension: 3",
    frame === "LPS" ? "space: left-posterior-superior" : "space dimension: 3",
    `sizes: ${size.join(" ")}`,
    `space directions: ${[0, 1, 2].map((k) => vector(axis(k))).join(" ")}`,
    "kinds: domain domain domain",
    ...(dtype === "uint8" ? [] : ["endian: little"]),
    `encoding: ${encoding}`,
    'space units: "mm" "mm" "mm"',
    `space origin: ${vector(origin)}`,
  ];
  return `${lines.join("\n")}\n\n`;
}
