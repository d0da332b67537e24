import { writeFile } from "node:fs/promises";
import { openScan } from "#main/intake/open-scan.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { seeded } from "#test/main/intake/written-by-hand.ts";

/**
 * Changes and truncates a file by a seeded plan, mostly within its first `headerBytes`, and reads each variant whole.
 * @returns how many were refused and read; any error that is not the typed one for unreadable input is thrown.
 */
export async function fuzzFile(order: {
  /** The file that is changed. */
  path: string;
  /** What is opened: the file itself, or the folder or header that leads to it. */
  open?: string;
  whole: Uint8Array;
  headerBytes: number;
  turns: number;
  seed: number;
  choice?: ScanChoice;
}): Promise<{ refused: number; read: number }> {
  const random = seeded(order.seed);
  const outcome = { refused: 0, read: 0 };
  for (let turn = 0; turn < order.turns; turn++) {
    const { whole } = order;
    const bytes = Buffer.from(turn % 4 === 0 ? whole.subarray(0, Math.floor(random() * whole.length)) : whole);
    const changes = turn % 4 === 0 ? 0 : 1 + Math.floor(random() * 3);
    for (let k = 0; k < changes; k++)
      bytes[Math.floor(random() * Math.min(order.headerBytes, bytes.length))] = Math.floor(random() * 256);
    await writeFile(order.path, bytes);
    try {
      const source = await openScan(order.open ?? order.path, order.choice);
      try {
        const [x, y, z] = source.header.size;
        if (x * y * z > 1e6) throw new Error(`turn ${turn}: a scan of ${x} x ${y} x ${z} from ${bytes.length} bytes`);
        await gatherVoxels(source);
      } finally {
        await source.close();
      }
      outcome.read++;
    } catch (error) {
      if ((error as { tag?: string }).tag !== "unreadable-input") throw new Error(`turn ${turn}`, { cause: error });
      outcome.refused++;
    }
  }
  return outcome;
}
