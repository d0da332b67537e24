import type { SectionRequest } from "#shared/api/engine.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { indexToMm } from "#shared/volume/grid.ts";

/** Longer side of the shelf's picture, pixels. */
const SIDE = 192;

/**
 * The request for a specimen's small picture: the brightest voxel along the scan's second axis (dark strings: the mean), the
 * third axis upwards.
 */
export function pictureRequest(specimen: SpecimenRecord, number: number): SectionRequest {
  const { size, spacing, direction } = specimen.volume;
  const extent = size.map((count, axis) => count * spacing[axis]!) as [number, number, number];
  const pixelMm = Math.max(extent[0], extent[2]) / SIDE;
  const axis = (k: number, length: number): Vec3 => [
    direction[k]! * length,
    direction[3 + k]! * length,
    direction[6 + k]! * length,
  ];
  const corner = indexToMm(specimen.volume, [-0.5, (size[1] - 1) / 2, size[2] - 0.5]);
  return {
    ticket: { window: `picture-${specimen.id}`.slice(0, 64), lane: "space", number },
    specimen: specimen.id,
    plane: {
      origin: corner,
      u: axis(0, pixelMm),
      v: axis(2, -pixelMm),
      width: Math.max(1, Math.round(extent[0] / pixelMm)),
      height: Math.max(1, Math.round(extent[2] / pixelMm)),
    },
    slabMm: extent[1],
    slabMode: specimen.polarity === "bright" ? "max" : "mean",
    low: specimen.display.low,
    high: specimen.display.high,
    quality: "moving",
  };
}
