// Ridge and shortest paths beside scikit-image's compiled ones, on the same arrays, in CPU time, and whether the answers agree.
// Without Debian's python3-skimage the library's column says why it is empty.
import { spawnSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { benchCost } from "#shared/tracing/minimal-path/front.bench.ts";
import { createFront, createFrontDomain, expandFront } from "#shared/tracing/minimal-path/front.ts";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { ridgeBlockInto } from "#shared/tracing/ridge/ridge-block.ts";
import { createRidgeKernel } from "#shared/tracing/ridge/ridge-kernel.ts";

/** Python programs to ask, Debian's own first: a Python from elsewhere does not see Debian's packages. */
const PYTHONS = ["/usr/bin/python3", "python3"];
const ROUNDS = 3;
/** From this side on the library is run once: it takes half a minute. */
const ONE_ROUND_SIDE = 192;
/** Least cost of the benchmark's arrays, and the voxel that paths start from. */
const LEAST_COST = 0.05;

const PROGRAM = `
import json, sys, time
import numpy as np
import skimage
from skimage.filters import sato
from skimage.graph import MCP_Geometric

def median_cpu(work, rounds):
    times = []
    for _ in range(rounds):
        start = time.process_time()
        answer = work()
        times.append(1000 * (time.process_time() - start))
    return sorted(times)[len(times) // 2], answer

job = json.loads(sys.argv[1])
values = np.fromfile(job["file"], dtype=np.float32).reshape((job["side"],) * 3)
if job["kind"] == "ridge":
    ms, answer = median_cpu(lambda: sato(values, sigmas=[job["sigma"]], black_ridges=False, mode="nearest"), job["rounds"])
    answer = answer.astype(np.float64)
else:
    costs = values.astype(np.float64)
    ms, answer = median_cpu(lambda: MCP_Geometric(costs, fully_connected=True).find_costs([(0, 0, 0)])[0], job["rounds"])
np.ascontiguousarray(answer, dtype=np.float64).tofile(job["out"])
print(json.dumps({"ms": ms, "version": skimage.__version__}))
`;

interface LibraryAnswer {
  readonly ms: number;
  readonly version: string;
  readonly values: Float64Array;
}

/** The library's median CPU time and answer for a cube of values, or why there is none. */
function askLibrary(
  job: { kind: "ridge" | "paths"; sigma?: number },
  values: Float32Array,
  side: number,
): LibraryAnswer | string {
  const folder = mkdtempSync(join(tmpdir(), "tautline-bench-"));
  try {
    const [file, out] = [join(folder, "values"), join(folder, "answer")];
    writeFileSync(file, values);
    for (const python of PYTHONS) {
      const argument = JSON.stringify({ ...job, file, out, side, rounds: side >= ONE_ROUND_SIDE ? 1 : ROUNDS });
      const run = spawnSync(python, ["-c", PROGRAM, argument], { encoding: "utf8" });
      if (run.status !== 0) continue;
      const bytes = readFileSync(out);
      const answer = JSON.parse(run.stdout) as { ms: number; version: string };
      return { ...answer, values: new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength)) };
    }
    return "not compared: python3-skimage is not installed (Debian: apt-get install python3-skimage)";
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** Median CPU milliseconds of a piece of work; one round before is not counted. */
function medianCpuMs(work: () => void, cpuMs: () => number): number {
  const times = Array.from({ length: ROUNDS + 1 }, () => {
    const start = cpuMs();
    work();
    return cpuMs() - start;
  });
  return times.slice(1).sort((a, b) => a - b)[ROUNDS >> 1]!;
}

function ridgeRow(side: number, sigma: number, print: (line: string) => void, cpuMs: () => number): void {
  const kernel = gaussianKernels(sigma);
  const wide = side + 2 * kernel.reach;
  const values = new Float32Array(side ** 3);
  let seed = 1;
  for (let v = 0; v < values.length; v++) {
    seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
    values[v] = (seed >>> 8) / 65536;
  }
  // The library's cube ends where its values end: beyond, the nearest ones repeat, as it is told to do itself.
  const clamp = (at: number) => Math.min(Math.max(at - kernel.reach, 0), side - 1);
  const block = Float32Array.from({ length: wide ** 3 }, (_, v) => {
    const [x, y, z] = [v % wide, Math.floor(v / wide) % wide, Math.floor(v / wide / wide)];
    return values[(clamp(z) * side + clamp(y)) * side + clamp(x)]!;
  });
  const n = sigma * sigma;
  const out = new Float32Array(side ** 3);
  const compiled = createRidgeKernel();
  const run = (damping: number) =>
    ridgeBlockInto(
      block,
      [side, side, side],
      { kernels: [kernel, kernel, kernel], normalise: [n, n, n, n, n, n], slope: [sigma, sigma, sigma], damping },
      1,
      out,
      compiled,
    );
  const ms = medianCpuMs(() => run(0.25), cpuMs);
  run(0);
  const own = side ** 3 / ms / 1000;
  const there = askLibrary({ kind: "ridge", sigma }, values, side);
  const head = `ridge at one level  sigma ${sigma.toFixed(2)} voxels  ${side}^3  ${own.toFixed(1)} Mvoxel/CPU s`;
  if (typeof there === "string") {
    print(`${head}  ${there}`);
    return;
  }
  const library = side ** 3 / there.ms / 1000;
  print(
    `${head}  sato (scikit-image ${there.version}) ${library.toFixed(2)}  ratio ${(own / library).toFixed(1)} (goal 6)  ` +
      `correlation of the answers, ours not damped, ${correlation(out, there.values).toFixed(3)}`,
  );
}

function pathsRow(side: number, kind: "uniform" | "waves" | "flat", print: (line: string) => void, cpuMs: () => number): void {
  const cost = benchCost(kind, side);
  const box = { size: [side, side, side], spacing: [1, 1, 1], leastCost: LEAST_COST, mostCost: 1 } as const;
  let distance: Float64Array = new Float64Array(0);
  const ms = medianCpuMs(() => {
    const front = createFront(createFrontDomain(box, cost), 0);
    expandFront(front, Number.POSITIVE_INFINITY);
    distance = front.distance;
  }, cpuMs);
  const nanoseconds = (each: number) => ((each * 1e6) / side ** 3).toFixed(0);
  const head = `shortest paths  ${kind.padEnd(8)} ${side}^3  ${nanoseconds(ms)} ns/voxel`;
  const there = askLibrary({ kind: "paths" }, cost, side);
  if (typeof there === "string") {
    print(`${head}  ${there}`);
    return;
  }
  let apart = 0;
  for (let v = 0; v < distance.length; v++)
    apart = Math.max(apart, Math.abs(distance[v]! - there.values[v]!) / Math.max(there.values[v]!, 1e-12));
  print(
    `${head}  MCP_Geometric (scikit-image ${there.version}) ${nanoseconds(there.ms)}  ratio ${(ms / there.ms).toFixed(2)} (goal 0.3)  ` +
      `distances ${apart < 1e-9 ? "equal" : "DIFFERENT"}: at most ${apart.toExponential(1)} of their size apart`,
  );
}

function correlation(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let [sa, sb, saa, sbb, sab] = [0, 0, 0, 0, 0];
  for (let i = 0; i < a.length; i++) {
    sa += a[i]!;
    sb += b[i]!;
    saa += a[i]! ** 2;
    sbb += b[i]! ** 2;
    sab += a[i]! * b[i]!;
  }
  const n = a.length;
  return (sab - (sa * sb) / n) / Math.sqrt((saa - sa ** 2 / n) * (sbb - sb ** 2 / n));
}

/** Prints a row a case; reports, never fails. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  for (const sigma of [0.88, 1.25, 1.77]) ridgeRow(96, sigma, print, cpuMs);
  for (const side of [128, 192]) for (const kind of ["uniform", "waves", "flat"] as const) pathsRow(side, kind, print, cpuMs);
}
