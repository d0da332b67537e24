// What grows with a scan's size and what does not: scans of 0.5 to 8 GB taken in by the built command line and shown by the built
// server. Run: npm run build && npm run bench -- growth [GB ...]
import { execFile } from "node:child_process";
import { mkdirSync } from "node:fs";
import { rm } from "node:fs/promises";
import { loadavg } from "node:os";
import { join } from "node:path";
import { promisify } from "node:util";
import { TOKEN_HEADER } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { DIST, startProgram } from "#test/browser/running-program.ts";
import { writeReferenceScan } from "#test/tools/reference-scan.ts";
import { sizesOr, withWorkFolder } from "#test/tools/work-folder.ts";

const USUAL_GB = [0.5, 1, 2, 4, 8];
/** The scan, its store of at most 1.42 times, and some room. */
const DISK_SHARE = 2.6;
const run = promisify(execFile);

interface Row {
  readonly gb: number;
  readonly intake: { readonly seconds: number; readonly cpuSeconds: number; readonly peakMemoryBytes: number };
  readonly openMs: number;
  readonly firstPlaneMs: number;
  readonly obliqueMs: number;
  readonly nextObliqueMs: number;
}

/** A line a size. The scan's file is in the system's cache when it is taken in, and so is the store when it is opened. */
export async function bench(print: (line: string) => void): Promise<void> {
  const sizes = sizesOr(USUAL_GB);
  await withWorkFolder(DISK_SHARE * Math.max(...sizes) + 1e9, async (folder) => {
    print("GB    intake CPU s  wall s  CPU s/GB  peak MB  open ms  first plane ms  oblique ms  next oblique ms  load");
    for (const bytes of sizes) {
      const row = await measure(join(folder, `${bytes}`), bytes);
      const { seconds, cpuSeconds, peakMemoryBytes } = row.intake;
      const cells = [
        row.gb.toFixed(2).padEnd(5),
        cpuSeconds.toFixed(1).padStart(12),
        seconds.toFixed(1).padStart(7),
        (cpuSeconds / row.gb).toFixed(1).padStart(9),
        (peakMemoryBytes / 1e6).toFixed(0).padStart(8),
        row.openMs.toFixed(0).padStart(8),
        row.firstPlaneMs.toFixed(0).padStart(15),
        row.obliqueMs.toFixed(0).padStart(11),
        row.nextObliqueMs.toFixed(0).padStart(16),
        loadavg()[0]!.toFixed(1).padStart(5),
      ];
      print(cells.join(" "));
    }
  });
}

async function measure(home: string, bytes: number): Promise<Row> {
  mkdirSync(home);
  const scan = join(home, "scan.nrrd");
  const voxelBytes = await writeReferenceScan(scan, bytes);
  const library = join(home, "library");
  const cli = join(DIST, "main/cli.mjs");
  const { stdout } = await run(process.execPath, [cli, "intake", scan, "--library", library, "--polarity", "bright", "--json"]);
  const intake = JSON.parse(stdout) as Row["intake"] & { specimen: string };
  await rm(scan);
  const program = await startProgram(home);
  try {
    const { origin, hash } = new URL(program.url);
    const token = new URLSearchParams(hash.slice(1)).get("token")!;
    const ask = async (method: string, path: string, body?: object): Promise<Response> => {
      const sent = body === undefined ? {} : { body: JSON.stringify(body) };
      const response = await fetch(origin + path, { method, headers: { [TOKEN_HEADER]: token }, ...sent });
      if (!response.ok) throw new Error(`${path} answered ${response.status}: ${await response.text()}`);
      return response;
    };
    const timed = async (work: () => Promise<unknown>) => {
      const began = performance.now();
      await work();
      return performance.now() - began;
    };
    let record: SpecimenRecord | undefined;
    // What the desk asks for before it shows anything.
    const openMs = await timed(async () => {
      record = (await (await ask("GET", `/api/specimens/${intake.specimen}`)).json()) as SpecimenRecord;
      await ask("POST", "/api/engine/histogram", { specimen: intake.specimen });
    });
    const { size, spacing, origin: corner } = record!.volume;
    const middle = corner.map((c, k) => c + (size[k]! * spacing[k]!) / 2);
    let number = 0;
    const plane = async (pixel: number, tilt: number, off: number) => {
      const u = [pixel, 0, 0];
      const v = [0, pixel * Math.cos(tilt), pixel * Math.sin(tilt)];
      const normal = [0, -Math.sin(tilt), Math.cos(tilt)];
      const place = middle.map((m, k) => m + off * normal[k]! - 450 * u[k]! - 350 * v[k]!);
      const { low, high } = record!.display;
      const how = { slabMm: 0, slabMode: "max", quality: "still", low, high };
      const ticket = { window: "bench", lane: "section", number: ++number };
      const body = { ticket, specimen: intake.specimen, plane: { origin: place, u, v, width: 900, height: 700 }, ...how };
      await (await ask("POST", "/api/engine/section", body)).arrayBuffer();
    };
    const firstPlaneMs = await timed(() => plane((size[0] * spacing[0]) / 900, 0, 0));
    const obliqueMs = await timed(() => plane(spacing[0], 0.7, 0));
    const later: number[] = [];
    for (let n = 1; n <= 15; n++) later.push(await timed(() => plane(spacing[0], 0.7, n * spacing[0])));
    const nextObliqueMs = later.sort((a, b) => a - b)[7]!;
    return { gb: voxelBytes / 1e9, intake, openMs, firstPlaneMs, obliqueMs, nextObliqueMs };
  } finally {
    await program.stop();
    await rm(home, { recursive: true, force: true, maxRetries: 5 });
  }
}
