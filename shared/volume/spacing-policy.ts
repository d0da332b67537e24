import type { ScanWarningCode } from "#shared/api/routes.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { headerSpacingMm, type ScanHeader } from "#shared/volume/scan-header.ts";

export interface ScanWarning {
  readonly code: ScanWarningCode;
  readonly message: string;
}

/** What may be believed of a header's voxel size. */
export interface SpacingVerdict {
  /** Millimetres; null exactly when unsettled. */
  readonly spacing: Vec3 | null;
  /** No unit, or a spacing that is missing, zero, negative or not finite: a person must say it. */
  readonly unsettled: boolean;
  /** Believable but odd: a person should look at it. */
  readonly doubtful: boolean;
  /** In the order of their codes. */
  readonly warnings: readonly ScanWarning[];
}

const DOUBTS: readonly ScanWarningCode[] = ["spacing-one", "anisotropic", "spacing-range", "size-range"];
const LEAST_SPACING_MM = 0.001;
const MOST_SPACING_MM = 0.5;
const LEAST_SIDE_MM = 5;
const MOST_SIDE_MM = 200;
/** Spacings such as 0.5 mm arrive with a last-bit error; the limits themselves are inside. */
const SLACK = 1e-9;

/**
 * Judges a header's voxel size: *unsettled* when no unit, or a spacing missing, zero, negative or not finite; *doubtful* when a
 * spacing is exactly 1.0, an axis ratio is off 1 by more than 1e-4, a spacing is outside 1-500 um or a side outside 5-200 mm.
 */
export function judgeSpacing(header: ScanHeader): SpacingVerdict {
  const { headerSpacing: written, unit } = header;
  const warnings: ScanWarning[] = [];
  const warn = (code: ScanWarningCode, message: string) => warnings.push({ code, message });
  if (!header.mmPerUnit) {
    warn("no-unit", unit === null ? "The header names no unit of length." : `The header's unit '${unit}' is no known length.`);
  }
  const good = written?.every((s) => Number.isFinite(s) && s > 0) ?? false;
  if (!written) warn("no-spacing", header.spacingRemark ?? "The header does not give a voxel size along every axis.");
  else if (!good) warn("bad-spacing", `The header's voxel size is ${written.join(", ")}; each must be a positive number.`);
  const settled = good && header.mmPerUnit !== null;
  const spacing = settled ? headerSpacingMm(header) : null;
  if (good && written) {
    if (written.some((s) => s === 1)) {
      warn(
        "spacing-one",
        `A voxel size is exactly 1${unit === null ? "" : ` ${unit}`}, which programs write when they know none.`,
      );
    }
    const sizes = spacing ?? written;
    if (Math.max(...sizes) / Math.min(...sizes) - 1 > 1e-4) {
      warn("anisotropic", `The voxels are not cubes: ${sizes.map(short).join(" x ")}${spacing ? " mm" : ""}.`);
    }
  }
  if (spacing) warnings.push(...judgeRanges(header, spacing));
  if (header.frame === "scan") warn("no-frame", "The header names no patient frame; places are in the scan's own axes.");
  const doubtful = warnings.some((warning) => DOUBTS.includes(warning.code));
  return { spacing, unsettled: spacing === null, doubtful, warnings };
}

function judgeRanges(header: ScanHeader, spacing: Vec3): ScanWarning[] {
  const found: ScanWarning[] = [];
  const odd = spacing.filter((s) => s < LEAST_SPACING_MM * (1 - SLACK) || s > MOST_SPACING_MM * (1 + SLACK));
  if (odd.length > 0) {
    const message = `A voxel size of ${short(odd[0]!)} mm lies outside 0.001-0.5 mm.`;
    found.push({ code: "spacing-range", message });
  }
  const sides = spacing.map((s, axis) => s * header.size[axis]!);
  const oddSide = sides.find((side) => side < LEAST_SIDE_MM * (1 - SLACK) || side > MOST_SIDE_MM * (1 + SLACK));
  if (oddSide !== undefined) {
    found.push({ code: "size-range", message: `A side of ${short(oddSide)} mm lies outside 5-200 mm.` });
  }
  return found;
}

function short(value: number): string {
  return String(Number(value.toPrecision(6)));
}
