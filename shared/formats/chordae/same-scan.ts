import type { FileVolume } from "#shared/formats/chordae/chordae-file.ts";

/** What tells a scan: the hash of its voxels, and of the whole scan that it was cropped or binned from. */
export type ScanIdentity = Pick<FileVolume, "sha256"> & { readonly derivedFrom?: Pick<FileVolume, "sha256"> };

/**
 * Whether two scans are one: `same` also where one is a part of the other or both are parts of one whole, since places in
 * millimetres agree in them; `unsaid` when a hash is missing; else `other`.
 */
export function relationOfScans(
  a: ScanIdentity | null | undefined,
  b: ScanIdentity | null | undefined,
): "same" | "other" | "unsaid" {
  if (a?.sha256 == null || b?.sha256 == null) return "unsaid";
  const mine = [a.sha256, a.derivedFrom?.sha256].filter((hash) => typeof hash === "string");
  return mine.some((hash) => hash === b.sha256 || hash === b.derivedFrom?.sha256) ? "same" : "other";
}
