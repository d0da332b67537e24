import { constants, gunzipSync } from "node:zlib";
import type { ReadFile } from "#main/intake/read-file.ts";

/** Enough compressed bytes for a header even where they do not shrink, or where the gzip header carries a long name. */
const LOOKED_AT = 4096;

/** The first `length` bytes that a gzip file holds; fewer, or none, where it is cut short or damaged. */
export async function gzipBeginning(file: ReadFile, length: number): Promise<Uint8Array> {
  const head = await file.readUpTo(0, LOOKED_AT);
  try {
    // A flush instead of an end: the rest of the stream is not there.
    return gunzipSync(head, { finishFlush: constants.Z_SYNC_FLUSH, maxOutputLength: LOOKED_AT * 1100 }).subarray(0, length);
  } catch {
    return new Uint8Array(0);
  }
}
