import { openScan } from "#main/intake/open-scan.ts";
import { PackingSampler } from "#main/intake/packing/packing-sampler.ts";
import { slabsFor } from "#main/intake/packing/sample-packing.ts";
import { type IntakeProgress, ProgressMeter } from "#main/intake/progress.ts";
import { slicesOf } from "#main/intake/slices-of.ts";
import type { ProjectionPicture, ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { type GreyPicture, Projections } from "#shared/volume/projections.ts";
import { storedTypeOf } from "#shared/volume/stored-type.ts";

export interface ProjectHooks {
  readonly signal?: AbortSignal;
  /** Monotonic milliseconds. */
  readonly now?: () => number;
  onProgress?(progress: IntakeProgress): void;
}

/** Of larger seekable scans, slices spread evenly are looked at. */
const WHOLE_BYTES = 512 * 1024 * 1024;

/**
 * Three small projections of a scan, and a sample of what packing would gain. A seekable scan of more than 512 MB is looked at
 * in some slices, evenly spread; a packed stream is read through once. Memory: a run of slices.
 * @throws unreadable-input, cancelled
 */
export async function projectScan(request: ProjectionsRequest, hooks: ProjectHooks = {}): Promise<ProjectionsAnswer> {
  const { path, polarity, ...choice } = request;
  const source = await openScan(path, { ...choice, orFirst: true });
  try {
    const now = hooks.now ?? (() => performance.now());
    const { size, dtype } = source.header;
    const stored = storedTypeOf(dtype)?.dtype ?? null;
    const planeBytes = size[0] * size[1] * BYTES_OF_DTYPE[dtype];
    const whole = !source.seekable || planeBytes * size[2] <= WHOLE_BYTES;
    const slices = whole ? size[2] : Math.max(3, Math.min(size[2], Math.floor(WHOLE_BYTES / planeBytes)));
    const pictures = new Projections(size, slices, polarity === "dark");
    const sampler = stored === null ? null : new PackingSampler(size, stored, slabsFor(planeBytes));
    const meter = new ProgressMeter(source, now, hooks.onProgress, false);
    meter.begin("Looking through the scan");
    let done = 0;
    for (const [z0, z1] of whole ? [[0, size[2]] as const] : spread(size, slices))
      for await (const [z, slice] of slicesOf(source, z0, z1, hooks.signal)) {
        pictures.add(z, slice);
        if (whole) sampler?.add(z, slice);
        meter.slices(Math.round((++done * size[2]) / slices));
      }
    if (!whole && sampler)
      for (const [z0, z1] of sampler.ranges())
        for await (const [z, slice] of slicesOf(source, z0, z1, hooks.signal)) sampler.add(z, slice);
    const { alongZ, alongY, alongX } = pictures.pictures();
    return {
      alongZ: sendable(alongZ),
      alongY: sendable(alongY),
      alongX: sendable(alongX),
      slices,
      of: size[2],
      packing: sampler?.measure(now) ?? null,
    };
  } finally {
    await source.close();
  }
}

/** Single slices, the first and the last among them. */
function spread(size: Vec3, count: number): [number, number][] {
  return Array.from({ length: count }, (_, k) => {
    const z = Math.round((k * (size[2] - 1)) / (count - 1));
    return [z, z + 1];
  });
}

function sendable({ width, height, grey }: GreyPicture): ProjectionPicture {
  return { width, height, data: Buffer.from(grey.buffer, grey.byteOffset, grey.byteLength).toString("base64") };
}
