import type { SpecimenRecord, SpecimenVolume } from "#shared/api/specimen.ts";
import type { ChordaeHeader, FileVolume } from "#shared/formats/chordae/chordae-file.ts";

/** Who drew the trees, and with what. `created` is ISO 8601, UTC. */
export interface FileAuthorship {
  readonly annotator: string;
  readonly pass: number;
  readonly created: string;
  readonly softwareVersion: string;
}

/**
 * The header of a file with trees of one specimen. Radii are blur-corrected exactly when the specimen's blur is known. A
 * specimen that was generated is said to be synthetic.
 */
export function headerOfSpecimen(specimen: SpecimenRecord, authorship: FileAuthorship): ChordaeHeader {
  return {
    frame: specimen.volume.frame,
    volume: fileVolume(specimen.name, specimen.volume),
    specimen: specimen.facts as ChordaeHeader["specimen"] & object,
    annotator: authorship.annotator,
    pass: authorship.pass,
    created: authorship.created,
    software: { name: "Tautline", version: authorship.softwareVersion },
    radii: specimen.volume.blurFwhmMm === null ? "raw" : "blur-corrected",
    ...(specimen.synthetic && { synthetic: true }),
  };
}

/** A specimen's volume as a tree file names it. */
export function fileVolume(name: string, volume: SpecimenVolume): FileVolume {
  const { sha256, dtype, size, spacing, origin, direction, handedness, blurFwhmMm, derivedFrom } = volume;
  return {
    name,
    sha256,
    dtype,
    size,
    spacing,
    origin,
    direction,
    handedness,
    blurFwhm: blurFwhmMm,
    ...(derivedFrom && { derivedFrom: { ...derivedFrom } }),
  };
}
