import type { VerbCall } from "#main/cli/verb.ts";
import { badCrop } from "#main/intake/intake-faults.ts";
import { TautlineError } from "#shared/errors.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { type Crop, faultOfCrop, type Region, wholeCrop } from "#shared/volume/region/region.ts";

/** Declaration of the flags for a part of a scan. */
export const REGION_OPTIONS = { crop: { type: "string" }, bin: { type: "string" } } as const;

/** Lines of help for {@link REGION_OPTIONS}. */
export const REGION_HELP = `  --crop x0,y0,z0,x1,y1,z1   keep this box alone, in voxels of the file from 0; x0 is in, x1 is out
  --bin 2                keep the mean of each 2 x 2 x 2 voxels (after the crop); places in mm stay what they are`;

/** The region that the flags give of a scan of `size` voxels; undefined when none is given. @throws misuse */
export function givenRegion(options: VerbCall["options"], name: string, size: Vec3): Region | undefined {
  if (options.crop === undefined && options.bin === undefined) return undefined;
  const bin = options.bin === undefined || options.bin === "1" ? 1 : options.bin === "2" ? 2 : null;
  if (bin === null) {
    const what = `--bin must be 2 (or 1, for no binning), found '${String(options.bin)}'.`;
    throw new TautlineError("misuse", what, { what });
  }
  if (options.crop === undefined) return { crop: wholeCrop(size), bin };
  const words = String(options.crop).split(",");
  const edges = words.map((word) => (/^\s*\d{1,10}\s*$/.test(word) ? Number(word) : Number.NaN));
  if (edges.length !== 6 || edges.some(Number.isNaN)) {
    const what = `--crop must be six whole numbers such as 100,100,0,900,900,500, found '${String(options.crop)}'.`;
    throw new TautlineError("misuse", what, { what });
  }
  const fault = faultOfCrop(size, edges);
  if (fault) throw badCrop(name, size, fault);
  return { crop: edges as unknown as Crop, bin };
}
