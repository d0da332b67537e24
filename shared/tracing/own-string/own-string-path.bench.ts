// The straightened search along 15 mm of a string 5 voxels across in noise, and its parts, in CPU time.

import { SeededRandom } from "#shared/random/seeded-random.ts";
import { cheapestThread } from "#shared/tracing/own-string/cheapest-thread.ts";
import { ownStringPath } from "#shared/tracing/own-string/own-string-path.ts";
import { planeRidge } from "#shared/tracing/own-string/plane-ridge.ts";
import { smoothAlong, straighten } from "#shared/tracing/own-string/straight-volume.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const SPACING = 0.04;
const SIZE = [400, 80, 72] as const;

/** Centreline of the bench's string at a share of its length, millimetres. */
function place(t: number): [number, number, number] {
  return [0.4 + 15 * t, 1.6 + 0.6 * Math.sin(5 * t), 1.4 + 0.3 * Math.cos(4 * t)];
}

function scan(): Uint16Array {
  const [nx, ny, nz] = SIZE;
  const voxels = new Uint16Array(nx * ny * nz);
  const random = new SeededRandom(7);
  for (let z = 0, v = 0; z < nz; z++)
    for (let y = 0; y < ny; y++)
      for (let x = 0; x < nx; x++, v++) {
        const [, cy, cz] = place((x * SPACING - 0.4) / 15);
        const d = Math.hypot(y * SPACING - cy, z * SPACING - cz) / SPACING;
        voxels[v] = 2000 + 1000 / (1 + Math.exp((d - 2.5) / 0.35)) + 200 * random.normal();
      }
  return voxels;
}

/** Runs the benchmark; one line a part, the second time with a checksum. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const context = createTraceContext(memoryPyramid(plainGrid(SIZE, [SPACING, SPACING, SPACING]), scan()), "bright");
  const path = Float64Array.from(Array.from({ length: 401 }, (_, i) => place(i / 400)).flat());
  const sum = (values: ArrayLike<number>) => Array.from(values).reduce((a, b) => a + b, 0);
  for (const round of ["first", "second", "third"]) {
    let start = cpuMs();
    const lap = () => {
      const spent = (cpuMs() - start).toFixed(0);
      start = cpuMs();
      return spent;
    };
    const volume = straighten(context.sampler, path, 0.9 * SPACING, 9, 1);
    const straightening = lap();
    const smooth = smoothAlong(volume, 2.5);
    const smoothing = lap();
    const ridge = planeRidge(smooth, 1.1);
    const answering = lap();
    const thread = cheapestThread(ridge, smooth.count, 19, 100);
    print(
      `${round} time: straightened ${straightening} ms, smoothed ${smoothing}, answers ${answering}, thread ${lap()}; checksum ${sum(thread)}`,
    );
    const own = ownStringPath(context, path, { aborted: false });
    print(`${round} time: the whole search ${lap()} ms; checksum ${own ? sum(own.points).toFixed(6) : "none"}`);
  }
}
