import { type BlockScale, createRidgeKernel, type RidgeKernel } from "#shared/tracing/ridge/ridge-kernel.ts";

/**
 * Fills `out` with the scale-normalised ridge measure sqrt(l1 l2) of one scale, where l1 >= l2 are the two largest
 * eigenvalues of minus the Hessian (bright strings) or of the Hessian (dark ones), and 0 where fewer than two are
 * positive; damped away from the crest, where the slope across the string is not zero, so that the inside of a thick string's rim is no
 * string of its own. At the axis of a solid cylinder of radius r and contrast 1 it is r^2 / (2 s^2) exp(-r^2 / (2 s^2)).
 * Computed in single precision: near a sheet, where l2 is nearly 0, the answer is right to about 1e-3 of l1.
 * A voxel's value depends on the voxels within reach alone and is computed in a fixed order: blocks have no seams, bit for bit.
 * @param block grey values, shape [nz + 2 rz, ny + 2 ry, nx + 2 rx], x fastest, r = reach of the scale's kernels; borrowed.
 * @param size nx, ny, nz of the output, voxels.
 * @param polarity +1 for bright strings, -1 for dark ones.
 * @param out shape [nz, ny, nx]; overwritten; grey values of contrast.
 * @source Sato et al. 1998 (the measure, geometric mean of the two cross-sectional curvatures); eigenvalues in closed form,
 *   Smith 1961, with the cosine as a polynomial (own fit).
 */
export function ridgeBlockInto(
  block: Float32Array,
  size: readonly [number, number, number],
  scale: BlockScale,
  polarity: 1 | -1,
  out: Float32Array,
  kernel: RidgeKernel = createRidgeKernel(),
): void {
  const [kx, ky, kz] = scale.kernels;
  const pad = [kx.reach, ky.reach, kz.reach] as const;
  const voxels = (size[0] + 2 * pad[0]) * (size[1] + 2 * pad[1]) * (size[2] + 2 * pad[2]);
  kernel.block(voxels).set(block.length === voxels ? block : block.subarray(0, voxels));
  out.set(kernel.run(size, pad, scale, polarity));
}
