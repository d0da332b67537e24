import type { Vec3 } from "#shared/geometry/types.ts";
import { type Crop, faultOfCrop, isWholeScan, type Region, wholeCrop } from "#shared/volume/region/region.ts";

/** Which part of the scan is kept, as filled in so far; edges as typed. */
export interface PartDraft {
  readonly isBox: boolean;
  /** x0, y0, z0, x1, y1, z1. */
  readonly edges: readonly string[];
  /** Each 2 x 2 x 2 voxels become one. */
  readonly isBinned: boolean;
}

/** All of a scan. */
export function wholeDraft(size: Vec3): PartDraft {
  return { isBox: false, edges: wholeCrop(size).map(String), isBinned: false };
}

/** The edges as numbers; not-a-number where one cannot be read. */
export function typedEdges(draft: PartDraft): number[] {
  return draft.edges.map((text) => (/^\s*\d{1,10}\s*$/.test(text) ? Number(text) : Number.NaN));
}

/** The region that the draft asks for (null: the whole scan as it is), or the sentence that says what is wrong with it. */
export function partOf(size: Vec3, draft: PartDraft): { readonly region: Region | null } | { readonly fault: string } {
  const crop = draft.isBox ? typedEdges(draft) : wholeCrop(size);
  const unread = crop.findIndex((edge) => Number.isNaN(edge));
  if (unread >= 0) {
    const edge = `${["x", "y", "z"][unread % 3]} ${unread < 3 ? "from" : "to"}`;
    return { fault: `The box's edge ‘${edge}’ is a whole number of voxels, found ‘${draft.edges[unread]}’.` };
  }
  const fault = faultOfCrop(size, crop);
  if (fault) return { fault: `The box needs ${fault.expected}, found ${fault.found}.` };
  const region: Region = { crop: crop as unknown as Crop, bin: draft.isBinned ? 2 : 1 };
  return { region: isWholeScan(size, region) ? null : region };
}
