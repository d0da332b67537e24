/** Bytes of unpacked chunks that are kept. */
const KEPT_BYTES = 8 * 1024 * 1024;

/** The last few unpacked chunks of a store: neighbouring bricks come out of the same ones. All its levels share the 8 MB. */
export class UnpackedChunks {
  /** Least recently used first. */
  readonly #kept = new Map<string, Uint8Array>();
  #bytes = 0;

  get(key: string): Uint8Array | undefined {
    const known = this.#kept.get(key);
    if (known) {
      this.#kept.delete(key);
      this.#kept.set(key, known);
    }
    return known;
  }

  /** Keeps a chunk; the caller writes to it no more. */
  set(key: string, chunk: Uint8Array): void {
    this.#bytes += chunk.byteLength - (this.#kept.get(key)?.byteLength ?? 0);
    this.#kept.set(key, chunk);
    for (const [oldest, bytes] of this.#kept) {
      if (this.#bytes <= KEPT_BYTES || oldest === key) break;
      this.#kept.delete(oldest);
      this.#bytes -= bytes.byteLength;
    }
  }

  clear(): void {
    this.#kept.clear();
    this.#bytes = 0;
  }
}
