import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

/** A tree file made from another format, and what was assumed or left out on the way, one sentence each. */
export interface ReadTwin {
  readonly file: ChordaeFile;
  readonly notes: readonly string[];
}
