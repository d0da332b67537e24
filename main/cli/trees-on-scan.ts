import { stat } from "node:fs/promises";
import { dirname } from "node:path";
import type { OpenVoxels } from "#main/cli/open-voxels.ts";
import { TautlineError } from "#shared/errors.ts";
import { type ChordaeFile, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { relationOfScans } from "#shared/formats/chordae/same-scan.ts";

/**
 * Refuses trees of another scan than the one they are put on, unless that is `allowed`; says so of trees that name no scan.
 * @param done what the verb does with them, as in "traced".
 * @throws other-scan
 */
export function refuseOtherScan(
  trees: ChordaeFile,
  path: string,
  voxels: OpenVoxels,
  allowed: boolean,
  done: string,
  say: (line: string) => void,
): void {
  const expected = trees.volume?.sha256 ?? null;
  if (expected === null) {
    say(`${path}: does not say which scan it belongs to; taken as belonging to this one.`);
    return;
  }
  const found = { sha256: voxels.sha256, derivedFrom: { sha256: voxels.derivedFrom } };
  if (relationOfScans(trees.volume, found) === "same") return;
  if (allowed) {
    say(`${path}: belongs to another scan; ${done} on this one as asked.`);
    return;
  }
  const message = `${path}: its trees belong to the scan ${expected.slice(0, 12)}..., this scan is ${voxels.sha256.slice(0, 12)}... Name the right scan, or give --other-scan to use them on this one.`;
  throw new TautlineError("other-scan", message, { file: path, expected, found: voxels.sha256 });
}

/** Says so when the places of trees are in another frame than the scan's; they are taken as they are. */
export function tellOtherFrame(trees: ChordaeFile, path: string, voxels: OpenVoxels, say: (line: string) => void): void {
  const { frame } = voxels.pyramid.grid;
  if (trees.frame === undefined || frameOf(trees) === frame) return;
  say(`${path}: its places are in frame ${frameOf(trees)}, the scan's in ${frame}; taken as they are.`);
}

/** Refuses a name that no file can be written under, before hours of work rather than after. @throws misuse */
export async function refuseUnwritable(path: string): Promise<void> {
  const folder = await stat(dirname(path)).catch(() => undefined);
  const found = await stat(path).catch(() => undefined);
  if (folder?.isDirectory() && !found?.isDirectory()) return;
  const what = found?.isDirectory()
    ? `--out ${path} is a folder; name a file.`
    : `--out ${path}: there is no folder ${dirname(path)}.`;
  throw new TautlineError("misuse", what, { what });
}
