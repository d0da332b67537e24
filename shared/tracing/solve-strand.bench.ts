// A 15 mm strand of 5 voxels across in noise: ridge tiles, path, centring with radii, and the whole solve, in CPU time.
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { centrePath } from "#shared/tracing/guided-run.ts";
import { legPath } from "#shared/tracing/leg-path.ts";
import { ridgeNearPin } from "#shared/tracing/pin-ridge.ts";
import { RIDGE_TILE_VOXELS } from "#shared/tracing/ridge/ridge-tiles.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const SPACING = 0.04;
const SIZE = [400, 80, 72] as const;

/** Centreline of the bench's string at a share of its length, millimetres. */
function place(t: number): Vec3 {
  return [0.4 + 15 * t, 1.6 + 0.6 * Math.sin(5 * t), 1.4 + 0.3 * Math.cos(4 * t)];
}

function scan(): Uint16Array {
  const [nx, ny, nz] = SIZE;
  const voxels = new Uint16Array(nx * ny * nz);
  let seed = 7;
  let v = 0;
  for (let z = 0; z < nz; z++)
    for (let y = 0; y < ny; y++)
      for (let x = 0; x < nx; x++, v++) {
        const [, cy, cz] = place((x * SPACING - 0.4) / 15);
        const d = Math.hypot(y * SPACING - cy, z * SPACING - cz) / SPACING;
        let noise = -6;
        // Twelve uniform numbers make a normal one.
        for (let k = 0; k < 12; k++) {
          seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
          noise += seed / 2 ** 32;
        }
        voxels[v] = 2000 + 1000 / (1 + Math.exp((d - 2.5) / 0.35)) + 200 * noise;
      }
  return voxels;
}

/** Runs the benchmark; one line a part with a checksum. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const pyramid = memoryPyramid(plainGrid(SIZE, [SPACING, SPACING, SPACING]), scan());
  const from = place(0);
  const to = place(1);
  const parameters = { polarity: "bright", blurFwhmMm: 0.06 } as const;
  let start = cpuMs();
  const context = createTraceContext(pyramid, "bright");
  print(`grey levels      ${(cpuMs() - start).toFixed(0)} ms  checksum ${context.levels.contrast.toFixed(3)}`);
  start = cpuMs();
  let sum = 0;
  let tiles = 0;
  for (let i = 0; i < 12; i++, tiles++) sum += context.ridges.tile(0, i, 1, 1).strength[5000]!;
  const spent = cpuMs() - start;
  print(
    `ridge, all octaves  ${((tiles * RIDGE_TILE_VOXELS) / spent / 1000).toFixed(2)} Mvoxel/CPU s  checksum ${sum.toFixed(3)}`,
  );
  const pin = ridgeNearPin(context, context.workingLevel, from);
  const expected = { ridge: pin.strength, widestRadiusMm: 1.6 * pin.radiusMm };
  const never = { aborted: false };
  start = cpuMs();
  legPath(context, context.workingLevel, from, to, expected, never);
  print(`path, cold tiles ${(cpuMs() - start).toFixed(0)} ms`);
  start = cpuMs();
  const path = legPath(context, context.workingLevel, from, to, expected, never)!;
  print(`path, warm tiles ${(cpuMs() - start).toFixed(0)} ms  checksum ${path.length}`);
  const widest = new Float64Array(path.length / 3).fill(expected.widestRadiusMm);
  for (const round of ["first", "second", "third"]) {
    start = cpuMs();
    const curve = centrePath(context, path, from, to, [pin.radiusMm, pin.radiusMm], widest, true, parameters.blurFwhmMm);
    const checksum = curve.points.reduce((a, b) => a + b, 0) + curve.radii.filter(Number.isFinite).reduce((a, b) => a + b, 0);
    print(`centring and radius of 15 mm, ${round} time  ${(cpuMs() - start).toFixed(0)} ms  checksum ${checksum.toFixed(6)}`);
  }
  start = cpuMs();
  const solved = solveStrand(pyramid, { from: roundPoint(from), via: [], to: roundPoint(to) }, parameters);
  print(`whole solve, cold  ${(cpuMs() - start).toFixed(0)} ms  checksum ${solved.points.reduce((a, b) => a + b, 0).toFixed(6)}`);
}
