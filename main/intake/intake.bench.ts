// Taking in an uncompressed NRRD of uint16 voxels, in one thread, beside a synced plain copy. Run: npm run bench -- intake
import { closeSync, copyFileSync, fsyncSync, mkdtempSync, openSync, rmSync, writeSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";

const SIZES = [128, 256, 512];
const ROUNDS = 3;

/** A file of `side` cubed uint16 voxels whose values repeat nowhere nearby. */
function writeScan(path: string, side: number): number {
  const file = openSync(path, "w");
  const lines = ["space: LPS", "space directions: (0.02,0,0) (0,0.02,0) (0,0,0.02)", 'space units: "mm" "mm" "mm"'];
  const head = ["NRRD0004", "type: uint16", "dimension: 3", `sizes: ${side} ${side} ${side}`, "endian: little", "encoding: raw"];
  writeSync(file, `${[...head, ...lines].join("\n")}\n\n`);
  const plane = new Uint16Array(side * side);
  for (let z = 0; z < side; z++) {
    for (let i = 0; i < plane.length; i++) plane[i] = (Math.imul(i + z * 7919, 2654435761) >>> 20) + 1000;
    writeSync(file, plane);
  }
  fsyncSync(file);
  closeSync(file);
  return plane.byteLength * side;
}

/** One line a size: median of three of wall and CPU time, of intake and of the copy, and the hash as a checksum. */
export async function bench(print: (line: string) => void, cpuMs: () => number): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), "tautline-bench-"));
  try {
    for (const side of SIZES) {
      const path = join(folder, "scan.nrrd");
      const bytes = writeScan(path, side);
      const walls: number[] = [];
      const cpus: number[] = [];
      const copies: number[] = [];
      let checksum = "";
      for (let round = 0; round < ROUNDS; round++) {
        const [wall, cpu] = [performance.now(), cpuMs()];
        const id = `bench${side}x${round}`.padEnd(16, "0");
        const source = await openScan(path);
        const common = {
          library: folder,
          id,
          name: "bench",
          created: 0,
          facts: {},
          synthetic: true,
          handedness: "unknown",
        } as const;
        const { record } = await makeSpecimen(source, { ...common, spacing: [0.02, 0.02, 0.02] });
        await source.close();
        walls.push(performance.now() - wall);
        cpus.push(cpuMs() - cpu);
        checksum = record.volume.sha256.slice(0, 12);
        rmSync(join(folder, "specimens"), { recursive: true });
        const began = performance.now();
        copyFileSync(path, join(folder, "copy"));
        const copy = openSync(join(folder, "copy"), "r+");
        fsyncSync(copy);
        closeSync(copy);
        copies.push(performance.now() - began);
        rmSync(join(folder, "copy"));
      }
      const rate = (ms: number) => `${((bytes / 1e6 / ms) * 1000).toFixed(0)} MB/s`;
      const [wall, cpu, copy] = [median(walls), median(cpus), median(copies)];
      print(
        `${(bytes / 1e6).toFixed(0)} MB: wall ${rate(wall)}, CPU ${rate(cpu)}, synced copy ${rate(copy)}, checksum ${checksum}`,
      );
    }
    print(`greatest resident memory ${(process.resourceUsage().maxRSS / 1024).toFixed(0)} MB`);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)]!;
}
