import { TautlineError } from "#shared/errors.ts";
import { type ChordaeFile, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { relationOfScans } from "#shared/formats/chordae/same-scan.ts";

/** A tree file with the name it goes by in messages. */
export interface NamedTrees {
  readonly name: string;
  readonly file: ChordaeFile;
}

/** Refuses trees in another frame than the reference's, where places mean something else. @throws other-scan */
export function refuseOtherFrame(reference: NamedTrees, other: NamedTrees): void {
  const [expected, found] = [frameOf(reference.file), frameOf(other.file)];
  if (expected === found) return;
  const sentence = `${other.name}: expected places in the frame ${expected} like ${reference.name}, found ${found}. Trees in different frames cannot be compared.`;
  throw new TautlineError("other-scan", sentence, { file: other.name, expected, found });
}

/** A sentence when two tree files belong to different scans; none when they share one (in whole or in part) or do not say. */
export function scanWarnings(reference: NamedTrees, other: NamedTrees): string[] {
  const [a, b] = [reference.file.volume, other.file.volume];
  if (relationOfScans(a, b) !== "other") return [];
  return [
    `${other.name} belongs to another scan (voxels ${b!.sha256!.slice(0, 12)}...) than ${reference.name} (${a!.sha256!.slice(0, 12)}...).`,
  ];
}
