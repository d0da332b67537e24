import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { diskFiles } from "#main/node/disk-files.ts";
import { openBag } from "#main/node/packet/bag-reader.ts";
import { writeBag } from "#main/node/packet/bag-writer.ts";

const MEGABYTES = 256;

/** A packet with a scan written as folder and as zip, and verified to the last byte. */
export async function bench(print: (line: string) => void, cpuMs: () => number): Promise<void> {
  const folder = await mkdtemp(join(tmpdir(), "tautline-bag-bench-"));
  try {
    const file = join(folder, "scan.bin");
    const size = MEGABYTES * 1024 * 1024;
    await writeFile(
      file,
      new Uint8Array(size).map((_, k) => k * 2654435761),
    );
    print(`a packet with a scan of ${MEGABYTES} MB; MB per second of CPU time`);
    for (const form of ["folder", "zip"] as const) {
      const order = { name: `packet-${form}`, folder, form, payload: [{ path: "scan.bin", file, size }], info: {}, key: null };
      const began = cpuMs();
      const { path } = await writeBag(diskFiles(), order);
      const written = cpuMs();
      const bag = await openBag(diskFiles(), path);
      let bytes = 0;
      for await (const piece of bag.pieces("data/scan.bin")) bytes += piece.length;
      const read = cpuMs();
      const rate = (ms: number) => Math.round((MEGABYTES * 1000) / ms);
      print(`  ${form}: written ${rate(written - began)}, verified ${rate(read - written)} (${bytes} bytes)`);
    }
  } finally {
    await rm(folder, { recursive: true });
  }
}
