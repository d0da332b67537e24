import { gunzipSync, gzip, gzipSync } from "node:zlib";

/**
 * Level of the codec: on grey noise the higher ones gain a hundredth and take several times as long. Written into the store's
 * metadata; readers need no level.
 */
export const PACK_LEVEL = 1;

/** Packs one brick off this thread (RFC 1952). */
export function packed(bytes: Uint8Array): Promise<Uint8Array> {
  return new Promise((resolve, reject) =>
    gzip(bytes, { level: PACK_LEVEL }, (error, out) => (error ? reject(error) : resolve(out))),
  );
}

/** {@link packed} in this thread, for measuring. */
export function packedHere(bytes: Uint8Array): Uint8Array {
  return gzipSync(bytes, { level: PACK_LEVEL });
}

/** The inverse, in this thread, as the engine does it. @throws RangeError when more than `most` bytes come out; Error when the stream is damaged. */
export function unpackedHere(bytes: Uint8Array, most: number): Uint8Array {
  return gunzipSync(bytes, { maxOutputLength: most, chunkSize: most + 1 });
}
