import { mkdtemp, rm, statfs } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";

/**
 * A folder for a benchmark's large files, under `TAUTLINE_BENCH_DIR` or the system's temporary folder; removed at the end.
 * @throws Error with what is missing when the disk does not hold `needed` bytes.
 */
export async function withWorkFolder<T>(needed: number, work: (folder: string) => Promise<T>): Promise<T> {
  const parent = process.env.TAUTLINE_BENCH_DIR ?? tmpdir();
  const { bavail, bsize } = await statfs(parent);
  const gb = (bytes: number) => (bytes / 1e9).toFixed(1);
  if (bavail * bsize < needed)
    throw new Error(
      `This needs ${gb(needed)} GB of disk; ${parent} has ${gb(bavail * bsize)} GB free. ` +
        "Choose smaller sizes (GB, after the benchmark's name), or name another disk with TAUTLINE_BENCH_DIR.",
    );
  const folder = await mkdtemp(join(parent, "tautline-bench-"));
  try {
    return await work(folder);
  } finally {
    await rm(folder, { recursive: true, force: true, maxRetries: 5 });
  }
}

/** Where all benchmarks run, none named, each takes one small size, GB. */
const SMALL_GB = 0.05;

/** Sizes given after the benchmark's name (`npm run bench -- growth 0.5 1`), bytes; else the usual ones, GB. */
export function sizesOr(usual: readonly number[]): number[] {
  if (process.argv[2] === undefined) return [SMALL_GB * 1e9];
  const given = process.argv.slice(3).flatMap((text) => text.split(","));
  const sizes = given.length > 0 ? given.map(Number) : usual;
  const wrong = sizes.find((size) => !(size >= 0.01 && size <= 64));
  if (wrong !== undefined) throw new Error(`Sizes are GB from 0.01 to 64, found '${given[sizes.indexOf(wrong)]}'.`);
  return sizes.map((size) => size * 1e9);
}
