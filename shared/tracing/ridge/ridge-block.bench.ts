// Throughput of the ridge kernel at one scale, in voxels per CPU second. Run: node with a TypeScript loader, or `npm run bench`.
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { ridgeBlockInto } from "#shared/tracing/ridge/ridge-block.ts";
import { createRidgeKernel } from "#shared/tracing/ridge/ridge-kernel.ts";

/** Runs the benchmark; one line a case with a checksum, so that a wrong answer cannot be fast. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  const n = 96;
  for (const sigma of [0.88, 1.25, 1.77]) {
    const kernel = gaussianKernels(sigma);
    const side = n + 2 * kernel.reach;
    const block = new Float32Array(side ** 3);
    let seed = 1;
    for (let i = 0; i < block.length; i++) {
      seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
      block[i] = (seed >>> 8) / 65536;
    }
    const out = new Float32Array(n ** 3);
    const compiled = createRidgeKernel();
    const normalise = Array.from({ length: 6 }, () => sigma * sigma) as [number, number, number, number, number, number];
    const scale = { kernels: [kernel, kernel, kernel] as const, normalise, slope: [sigma, sigma, sigma] as const, damping: 0 };
    const times: number[] = [];
    for (let round = 0; round < 4; round++) {
      const start = cpuMs();
      ridgeBlockInto(block, [n, n, n], scale, 1, out, compiled);
      times.push(cpuMs() - start);
    }
    const best = times.slice(1).sort((a, b) => a - b)[1]!;
    let sum = 0;
    for (const value of out) sum += value;
    print(
      `ridge one scale  sigma ${sigma} voxels  ${n}^3  ${(n ** 3 / best / 1000).toFixed(2)} Mvoxel/CPU s  checksum ${sum.toFixed(3)}`,
    );
  }
}
