import { IDENTITY3 } from "#shared/geometry/types.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import type { Derivation } from "#shared/volume/region/region.ts";
import { CHUNK_SIDE, levelFolder, SHARD_ZYX } from "#shared/volume/store/layout.ts";

const LITTLE = { name: "bytes", configuration: { endian: "little" } } as const;

/** As intake packs; any reader unpacks any level. */
const GZIP = { name: "gzip", configuration: { level: 1 } } as const;

/** The `zarr.json` of one level's array, as a JSON value. @source Zarr v3 core and its `sharding_indexed` codec. */
export function arrayMetadata(
  level: Pick<PyramidLevel, "size">,
  dtype: StoredDtype,
  packing: "plain" | "gzip" = "plain",
): Record<string, unknown> {
  const side = CHUNK_SIDE;
  const voxelBytes = dtype === "uint8" ? { name: "bytes" } : LITTLE;
  return {
    zarr_format: 3,
    node_type: "array",
    shape: [level.size[2], level.size[1], level.size[0]],
    data_type: dtype,
    chunk_grid: { name: "regular", configuration: { chunk_shape: [...SHARD_ZYX] } },
    chunk_key_encoding: { name: "default", configuration: { separator: "/" } },
    fill_value: 0,
    codecs: [
      {
        name: "sharding_indexed",
        configuration: {
          chunk_shape: [side, side, side],
          codecs: packing === "gzip" ? [voxelBytes, GZIP] : [voxelBytes],
          index_codecs: [LITTLE, { name: "crc32c" }],
          index_location: "end",
        },
      },
    ],
    dimension_names: ["z", "y", "x"],
    attributes: {},
  };
}

/**
 * The `zarr.json` of the store's group, as a JSON value: one multiscale image. OME-Zarr has no oblique directions, so where the
 * scan's are not the plain axes the translations count from the first voxel along the array's own axes; the whole frame stands
 * under `tautline`, and the two agree wherever both can.
 * @source OME-Zarr 0.5, multiscales.
 */
export function groupMetadata(
  name: string,
  grid: VolumeGrid,
  levels: readonly PyramidLevel[],
  sha256: string,
  derivedFrom: Derivation | null = null,
): Record<string, unknown> {
  const plain = grid.direction.every((value, k) => value === IDENTITY3[k]);
  const zyx = (v: readonly number[]) => [v[2]!, v[1]!, v[0]!];
  const datasets = levels.map((level) => {
    const shift = plain
      ? level.origin
      : level.spacing.map((s, axis) => ((level.factor[axis]! - 1) * s) / (2 * level.factor[axis]!));
    return {
      path: levelFolder(level.level),
      coordinateTransformations: [
        { type: "scale", scale: zyx(level.spacing) },
        { type: "translation", translation: zyx(shift) },
      ],
    };
  });
  const axes = ["z", "y", "x"].map((axis) => ({ name: axis, type: "space", unit: "millimeter" }));
  const description = "Each voxel is the mean of its existing children; integers are rounded half up.";
  const multiscale = { name, axes, datasets, type: "mean", metadata: { description } };
  const { frame, origin, direction } = grid;
  const own = { frame, origin, direction, sha256, ...(derivedFrom ? { derivedFrom } : {}) };
  return {
    zarr_format: 3,
    node_type: "group",
    attributes: { ome: { version: "0.5", multiscales: [multiscale] }, tautline: own },
  };
}
