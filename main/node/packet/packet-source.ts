/** A file of a packet, `path` from the packet's own folder with `/` between parts. */
export interface PacketEntry {
  readonly path: string;
  readonly bytes: number;
}

/** A packet as it lies on a disk, folder or zip; nothing of it is believed yet. */
export interface PacketSource {
  /** Name for messages, without the folders above. */
  readonly name: string;
  /** In the order of their paths. */
  readonly entries: readonly PacketEntry[];
  /** The bytes of a file in pieces; exactly as many as the entry says. @throws unreadable-input when there are others */
  pieces(path: string): AsyncGenerator<Uint8Array, void, void>;
}

/** Bytes read at once. */
export const PIECE_BYTES = 1024 * 1024;
/** Files a packet may hold: a scan of 16 GB has some 700. */
export const MOST_FILES = 100_000;
