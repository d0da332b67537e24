import type { Vec3 } from "#shared/geometry/types.ts";
import { sheetShare } from "#shared/tracing/strings/bright-share.ts";
import { directionAt } from "#shared/tracing/strings/outward.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** The rim of a sheet has it beside it along three quarters of its length. */
const RIM_QUANTILE = 0.25;

/**
 * True when a sheet hangs on a line along three quarters of its length or more: the line is no string but the sheet's rim, or a crest
 * within it.
 * @param line millimetres along the voxel axes. @param radiusMm typical radius along it.
 */
export function isRim(context: TraceContext, line: readonly Vec3[], radiusMm: number): boolean {
  const shares = line.map((at, n) => sheetShare(context, at, directionAt(line, n, 3 * radiusMm), radiusMm));
  shares.sort((a, b) => a - b);
  return shares[Math.floor(RIM_QUANTILE * shares.length)]! > 0;
}
