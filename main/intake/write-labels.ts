import { stopIfAborted } from "#main/intake/read-file.ts";
import { diskFiles, type WriteFiles } from "#main/intake/store/write-files.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { labelNrrd, labelVolume } from "#shared/formats/labels/label-volume.ts";

export interface LabelHooks {
  readonly files?: WriteFiles;
  readonly signal?: AbortSignal;
}

/**
 * Writes the trees as a label volume (NRRD, gzip) to a new file, in this thread; resolves once it is on the disk. On failure or
 * cancel the file is removed. @throws unreadable-input, misuse, disk-full, write-failed, cancelled.
 */
export async function writeLabels(file: ChordaeFile, path: string, hooks: LabelHooks = {}): Promise<{ bytes: number }> {
  const files = hooks.files ?? diskFiles;
  const labels = labelVolume(file, "trees", "the trees");
  const handle = await files.create(path);
  let bytes = 0;
  try {
    for (const chunk of labelNrrd(labels)) {
      stopIfAborted(hooks.signal, "writing labels");
      await handle.write(chunk, bytes);
      bytes += chunk.length;
      // A turn for messages, so that a stop is heard.
      await new Promise((resolve) => setImmediate(resolve));
    }
    await handle.sync();
    await handle.close();
    return { bytes };
  } catch (error) {
    await handle.close().catch(() => undefined);
    await files.remove(path);
    throw error;
  }
}
