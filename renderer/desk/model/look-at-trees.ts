import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";
import { relationOfScans } from "#shared/formats/chordae/same-scan.ts";
import type { TreeDocument } from "#shared/trees/document.ts";

/** The trees of a file, and how they stand to the specimen's scan. */
export interface LookedAtTrees {
  readonly name: string;
  readonly document: TreeDocument;
  /** `same`: of this scan, or of a part of it; `unsaid`: the file names no scan; `other`: of another scan or frame. */
  readonly scan: "same" | "unsaid" | "other";
  /** What the person should know before taking them in; null = nothing. */
  readonly sentence: string | null;
}

/** Reads a tree file and holds its voxel hash against the specimen's. @throws unreadable-input with what is wrong and where */
export function lookAtTrees(bytes: Uint8Array, name: string, specimen: SpecimenRecord): LookedAtTrees {
  const file = parseChordaeBytes(bytes, name);
  const document = documentFromFile(file);
  const { volume } = specimen;
  if (frameOf(file) !== volume.frame) {
    const sentence = `The file's places are in the frame ${frameOf(file)}, this scan's in ${volume.frame}: the trees would lie elsewhere.`;
    return { name, document, scan: "other", sentence };
  }
  const own = file.volume?.sha256;
  if (own == null) {
    return {
      name,
      document,
      scan: "unsaid",
      sentence: "The file does not say which scan its trees belong to. Check that they lie on the strings.",
    };
  }
  if (relationOfScans(file.volume, volume) === "same") return { name, document, scan: "same", sentence: null };
  const sentence = `The trees were traced on another scan (${file.volume?.name ?? "without a name"}, voxels ${own.slice(0, 12)}); this one is ${specimen.name}, voxels ${volume.sha256.slice(0, 12)}.`;
  return { name, document, scan: "other", sentence };
}
