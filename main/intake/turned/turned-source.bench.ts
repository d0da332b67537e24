import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { makeTurned } from "#main/intake/turned/make-turned.ts";
import { plainGrid } from "#shared/volume/grid.ts";

const SIZE = [512, 512, 256] as const;

/** A specimen's turned copy, made along its own slices and across them. */
export async function bench(print: (line: string) => void, cpuMs: () => number): Promise<void> {
  const library = await mkdtemp(join(tmpdir(), "tautline-turned-bench-"));
  try {
    const grid = plainGrid(SIZE, [0.04, 0.04, 0.04]);
    const source = sourceFromSlabs("bench", grid, "uint16", (z0, z1, out) => {
      for (let k = 0; k < out.length; k += 1) out[k] = (k * 31 + z0 * 7 + z1) & 0xffff;
    });
    const about = {
      name: "bench",
      created: 0,
      spacing: grid.spacing,
      handedness: "unknown",
      facts: {},
      synthetic: true,
    } as const;
    const { record } = await makeSpecimen(source, { ...about, library, id: "s".repeat(20), blurFwhmMm: null });
    const megabytes = (SIZE[0] * SIZE[1] * SIZE[2] * 2) / 1e6;
    print(`a scan of ${megabytes.toFixed(0)} MB turned and stored anew; MB per second of CPU time`);
    for (const [words, axes] of [
      ["along its slices", [1, 0, 2]],
      ["across its slices", [2, 0, 1]],
    ] as const) {
      const began = cpuMs();
      await makeTurned({
        store: join(library, "specimens", record.id, "scan.ome.zarr"),
        volume: record.volume,
        turn: { axes, flips: [true, false, axes[0] === 1] },
        library: await mkdtemp(join(library, "copy-")),
        id: "t".repeat(20),
        code: "BCDF-GHJK",
        polarity: "bright",
        synthetic: true,
      });
      print(`  ${words}: ${Math.round((megabytes * 1000) / (cpuMs() - began))}`);
    }
  } finally {
    await rm(library, { recursive: true });
  }
}
