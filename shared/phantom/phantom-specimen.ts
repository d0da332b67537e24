import type { SpecimenFacts } from "#shared/api/specimen.ts";
import {
  CHORDAE_FORMAT,
  CHORDAE_VERSION,
  type ChordaeFile,
  type ChordaeHeader,
  type FileLine,
  type FileTree,
} from "#shared/formats/chordae/chordae-file.ts";
import { fileLandmarks } from "#shared/formats/chordae/file-from-document.ts";
import type { RenderSlab } from "#shared/phantom/render-scan.ts";
import type { Crossing } from "#shared/phantom/valve-trees.ts";
import type { Landmarks } from "#shared/trees/document.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/** A synthetic specimen: its scan, to be made slab by slab, and the trees that are truly in it. */
export interface PhantomSpecimen {
  readonly name: string;
  readonly grid: VolumeGrid;
  readonly dtype: "uint16";
  readonly renderSlab: RenderSlab;
  /** The true trees; its volume has no hash yet (see {@link withVolumeHash}). */
  readonly truth: ChordaeFile;
  /** Where strands of two trees cross and touch on purpose. */
  readonly crossings: readonly Crossing[];
  readonly facts: SpecimenFacts;
  readonly landmarks: Landmarks;
  readonly blurFwhmMm: number;
}

/** Files of phantoms carry one fixed date: the same seed gives the same bytes. */
export const PHANTOM_DATE = "2026-12-01T09:00:00Z";

/** The file of a phantom's true trees. Everything in it says that it is synthetic. */
export function truthFile(
  facts: {
    readonly name: string;
    readonly grid: VolumeGrid;
    readonly blurFwhmMm: number;
    readonly facts: SpecimenFacts;
    readonly landmarks: Landmarks;
  },
  trees: readonly FileTree[],
  crossLinks: readonly FileLine[],
): ChordaeFile {
  const { size, spacing, origin, direction, frame } = facts.grid;
  return {
    format: CHORDAE_FORMAT,
    version: CHORDAE_VERSION,
    unit: "mm",
    frame,
    volume: {
      name: facts.name,
      dtype: "uint16",
      size,
      spacing,
      origin,
      direction,
      handedness: "confirmed",
      blurFwhm: facts.blurFwhmMm,
    },
    specimen: facts.facts as NonNullable<ChordaeHeader["specimen"]>,
    created: PHANTOM_DATE,
    synthetic: true,
    trees,
    ...(crossLinks.length > 0 && { crossLinks }),
    landmarks: fileLandmarks(facts.landmarks)!,
  };
}

/** The file with the hash of its scan's stored array, once that is known. */
export function withVolumeHash(file: ChordaeFile, sha256: string): ChordaeFile {
  const { name, ...rest } = file.volume ?? {};
  return { ...file, volume: { ...(name !== undefined && { name }), sha256, ...rest } };
}
