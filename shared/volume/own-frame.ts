import { type Matrix3, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import type { Derivation } from "#shared/volume/region/region.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

/**
 * The header of a store that this program wrote, with the whole frame (and the whole scan of a part) that stands under `tautline` beside the open metadata
 * (which has no oblique directions). Anything not well-formed there leaves the header as it is.
 */
export function withOwnFrame(header: ScanHeader, attributes: unknown): ScanHeader {
  const own = (attributes as { tautline?: unknown } | null | undefined)?.tautline;
  if (typeof own !== "object" || own === null) return header;
  const { frame, origin, direction, derivedFrom } = own as Record<string, unknown>;
  if ((frame !== "LPS" && frame !== "scan") || !isNumbers(origin, 3) || !isNumbers(direction, 9)) return header;
  return {
    ...header,
    frame,
    origin: pointMm(...(origin as unknown as Vec3)),
    originMmPerUnit: header.mmPerUnit ? [1, 1, 1] : null,
    direction: direction as unknown as Matrix3,
    ...(isDerivation(derivedFrom) ? { derivedFrom } : {}),
  };
}

function isDerivation(value: unknown): value is Derivation {
  if (typeof value !== "object" || value === null) return false;
  const { sha256, crop, bin } = value as Record<string, unknown>;
  return typeof sha256 === "string" && /^[0-9a-f]{64}$/.test(sha256) && isNumbers(crop, 6) && isNumbers([bin], 1);
}

function isNumbers(value: unknown, count: number): value is number[] {
  return Array.isArray(value) && value.length === count && value.every((n) => typeof n === "number" && Number.isFinite(n));
}
