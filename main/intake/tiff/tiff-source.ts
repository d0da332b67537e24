import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
export function isTiff(_: Uint8Array): boolean {
  return false;
}
export async function openTiff(path: string): Promise<SliceSource> {
  throw unreadable(path, "x", "y");
}
