// How soon a worker leaves work that something newer has taken the place of: the built engine over threads, cold ridge tiles.
// Wall-clock times, so what else runs on the machine counts; the load is printed. Run: npm run build && npm run bench -- tracing
import { existsSync, mkdtempSync, rmSync } from "node:fs";
import { loadavg, tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { createEngine } from "#main/engine/engine.ts";
import type { Ticket } from "#shared/api/engine.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { seeded, writeSpecimen } from "#test/main/engine/write-store.ts";

const SIDE = 224;
const SPACING = 0.04;
const ROUNDS = 24;
const PARAMETERS = { polarity: "bright", blurFwhmMm: null } as const;
/** Lets a task get into its work. */
const INTO_WORK_MS = [5, 15, 30, 60];

const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/** Prints a row a kind of work: the time from the newer request until the worker is free for it. */
export async function bench(print: (line: string) => void): Promise<void> {
  const dist = process.env.TAUTLINE_DIST ?? join(import.meta.dirname, "../../dist");
  const worker = join(dist, "main/engine-worker.mjs");
  if (!existsSync(worker)) return print("supersession not measured: dist/ is missing (npm run build)");
  const folder = mkdtempSync(join(tmpdir(), "tautline-bench-"));
  const random = seeded(9);
  const voxels = Uint16Array.from({ length: SIDE ** 3 }, () => 1000 + 400 * random());
  const specimen = writeSpecimen(folder, "hb-07", plainGrid([SIDE, SIDE, SIDE], [SPACING, SPACING, SPACING]), voxels);
  const engine = createEngine({
    library: async () => specimen,
    workerUrl: pathToFileURL(worker),
    workers: 1,
    cacheBytes: 256 * 2 ** 20,
  });
  let number = 0;
  const ticket = (lane: Ticket["lane"]): Ticket => ({ window: "w1", lane, number: ++number });
  const place = () => pointMm(...([0, 1, 2].map(() => SIDE * SPACING * (0.1 + 0.8 * random())) as [number, number, number]));
  const specimenId = "hb-07";
  const outside = pointMm(-5, -5, -5);
  const snap = (at = place()) =>
    engine.snap({
      ticket: ticket("guide"),
      specimen: specimenId,
      at,
      normal: [0, 0, 1],
      slabMm: 2,
      reachMm: 0.6,
      polarity: "bright",
    });
  const solve = (legs: "guide" | "straight") =>
    engine.solve({
      ticket: ticket("guide"),
      specimen: specimenId,
      strands: [{ from: place(), via: [], to: place(), legs: [legs] }],
      parameters: PARAMETERS,
    });
  let session = "";
  const preview = (to = place()) => engine.previewGuide({ ticket: ticket("guide"), session, to });
  // Each with something newer of its kind that takes no time itself.
  const works = {
    snap: { before: async () => undefined, older: () => snap(), newer: () => snap(outside) },
    "guide preview": {
      before: async () => {
        ({ session } = await engine.openGuide({
          ticket: ticket("guide"),
          specimen: specimenId,
          from: place(),
          parameters: PARAMETERS,
        }));
        // Answered when the session's fronts are at their pin.
        await preview(outside);
      },
      older: () => preview(),
      newer: () => preview(outside),
    },
    solve: { before: async () => undefined, older: () => solve("guide"), newer: () => solve("straight") },
  };
  try {
    for (const [name, { before, older, newer }] of Object.entries(works)) {
      const times: number[] = [];
      let begun = 0;
      for (let round = 0; round < ROUNDS; round++) {
        await before();
        let isDone = false;
        const work = older().then(
          () => {
            isDone = true;
          },
          () => undefined,
        );
        await pause(INTO_WORK_MS[round % INTO_WORK_MS.length]!);
        // Work that was done already would show nothing.
        if (!isDone) {
          const start = performance.now();
          await newer();
          times.push(performance.now() - start);
          begun++;
        }
        await work;
      }
      times.sort((a, b) => a - b);
      const at = (share: number) => (times[Math.min(begun - 1, Math.floor(share * begun))] ?? Number.NaN).toFixed(0);
      print(
        `${name.padEnd(14)} the newer is answered after: median ${at(0.5)} ms, 95th ${at(0.95)} ms, of ${begun} (goal 20)  load ${loadavg()[0]!.toFixed(1)}`,
      );
    }
  } finally {
    await engine.close();
    rmSync(folder, { recursive: true, force: true });
  }
}
