import { execFile } from "node:child_process";
import { createHash } from "node:crypto";
import { mkdirSync, readFileSync } from "node:fs";
import { open, stat } from "node:fs/promises";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { promisify } from "node:util";
import { beforeAll, describe, expect, it } from "vitest";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { lookAtScan } from "#main/intake/scan-info.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { nrrdHeaderText } from "#shared/volume/nrrd/write-nrrd-header.ts";
import { storeBytes } from "#shared/volume/store/store-bytes.ts";
import { scratchFolder } from "#test/main/intake/written-by-hand.ts";
import { referenceScan, writeReferenceScan } from "#test/tools/reference-scan.ts";

const CLI = join(process.env.TAUTLINE_DIST ?? fileURLToPath(new URL("../../../dist", import.meta.url)), "main", "cli.mjs");
const run = promisify(execFile);
const GB = 1e9;

/** Bytes that this process has read by system calls, from files and anything else; Linux alone counts them. */
function bytesRead(): number | null {
  if (process.platform !== "linux") return null;
  return Number(/^rchar: (\d+)/m.exec(readFileSync("/proc/self/io", "utf8"))![1]);
}

/** An NRRD of planes that are all the same noise. */
async function writePlanes(path: string, side: number, planes: number): Promise<string> {
  const noise = new Uint16Array(side * side);
  for (let n = 0; n < noise.length; n++) noise[n] = 1000 + (Math.imul(n, 2654435761) >>> 19);
  const bytes = new Uint8Array(noise.buffer);
  const file = await open(path, "w");
  const hash = createHash("sha256");
  await file.write(nrrdHeaderText(plainGrid([side, side, planes], [0.01, 0.01, 0.01]), "uint16", "raw"));
  for (let z = 0; z < planes; z++) {
    for (let done = 0; done < bytes.length; ) done += (await file.write(bytes, done)).bytesWritten;
    hash.update(bytes);
  }
  await file.close();
  return hash.digest("hex");
}

describe("a large scan", { timeout: 300_000 }, () => {
  let folder: string;
  beforeAll(async () => {
    folder = await scratchFolder();
  });

  // The most that ever was resident of the whole process (getrusage), as the command line itself reports it: nothing taken off.
  // Sixteen planes fill every slab that is held at once; more of them take no more memory (`npm run bench -- growth`).
  it("of planes of 4000 x 4000 is taken in with less than 1.2 GB of memory, and stored as it was", async () => {
    const scan = join(folder, "wide.nrrd");
    const sha256 = await writePlanes(scan, 4000, 16);
    const size = ["--spacing", "10,10,10", "--unit", "um"];
    const { stdout } = await run(process.execPath, [CLI, "intake", scan, "--library", join(folder, "wide"), ...size, "--json"]);
    const made = JSON.parse(stdout);
    console.log(`planes of 4000 x 4000: ${(made.peakMemoryBytes / 1e6).toFixed(0)} MB resident at most`);
    expect(made.sha256).toBe(sha256);
    expect(made.bytesRead).toBe(4000 * 4000 * 2 * 16);
    expect(made.peakMemoryBytes).toBeGreaterThan(0.1 * GB);
    expect(made.peakMemoryBytes).toBeLessThan(1.2 * GB);
  });

  describe("of the reference proportions, 2 : 2 : 1", () => {
    let scan: string;
    let bytes: number;
    beforeAll(async () => {
      scan = join(folder, "reference.nrrd");
      bytes = await writeReferenceScan(scan, 0.128 * GB);
    }, 300_000);

    it("is read once, as the system counts it; the look before that reads a sample of its own", async () => {
      const { spacing } = referenceScan(0.128 * GB).grid;
      const library = join(folder, "library");
      mkdirSync(library);
      const whole = (await stat(scan)).size;
      const start = bytesRead();
      await lookAtScan(scan);
      const looked = bytesRead();
      const source = await openScan(scan);
      const common = { created: 0, facts: {}, synthetic: true, handedness: "confirmed" } as const;
      const options = { library, id: "reference".padEnd(16, "0"), name: "reference", spacing, ...common };
      const made = await makeSpecimen(source, options);
      await source.close();
      const read = bytesRead();
      expect(made.bytesRead).toBe(bytes);
      // Real files of a real store: what the planner below counts on.
      expect(made.bytesWritten).toBe(storeBytes(made.record.volume, "uint16"));
      if (start === null || looked === null || read === null)
        return console.log("Reads are not counted by the system: only Linux tells what a process has read.");
      console.log(`of ${whole} bytes the look reads ${looked - start}, intake ${read - looked}`);
      // Beside the voxels: headers, what the file system answers, and the marks of a thread pool; nothing of the size of a slab.
      expect(read - looked).toBeGreaterThanOrEqual(bytes);
      expect(read - looked).toBeLessThan(1.01 * bytes);
      // A look takes the whole of a small scan, and a sample of a large one.
      expect(looked - start).toBeLessThan(1.1 * bytes);
    });

    it("takes at most 1.2 times its voxels on disk at 8 GB", () => {
      const { size } = referenceScan(8 * GB).grid;
      expect(size).toEqual([2000, 2000, 1000]);
      expect(storeBytes(plainGrid(size, [0.034, 0.034, 0.034]), "uint16")).toBeLessThanOrEqual(1.2 * 8 * GB);
    });
  });

  // By the planner that real stores agree with to the byte. The worst sides are those just beyond a multiple of a brick's 32 voxels.
  // Of cubic voxels: an axis of thicker slices is halved later, which makes the pyramid itself larger.
  it.each([
    [500, 1.42],
    [1000, 1.3],
  ])("of cubic voxels takes little more than its voxels when every side is %d or more: at most %d times", (least, most) => {
    const sides = Array.from({ length: 700 }, (_, n) => least + n).filter((side) => side === least || side % 32 === 1);
    for (const dtype of ["uint8", "uint16", "float32"] as const) {
      let worst = 0;
      for (const x of sides)
        for (const y of sides.filter((side) => side <= x))
          for (const z of sides)
            worst = Math.max(
              worst,
              storeBytes(plainGrid([x, y, z], [0.02, 0.02, 0.02]), dtype) / (x * y * z * BYTES_OF_DTYPE[dtype]),
            );
      console.log(`sides of ${least} or more, ${dtype}: at most ${worst.toFixed(4)} times`);
      expect(worst).toBeLessThanOrEqual(most);
    }
  });
});
