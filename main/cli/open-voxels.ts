import { randomBytes } from "node:crypto";
import { existsSync } from "node:fs";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { settledSpacing } from "#main/cli/spacing-option.ts";
import type { VerbCall } from "#main/cli/verb.ts";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import { checkInPlace } from "#main/intake/in-place/in-place-scan.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { readScanIntoMemory } from "#main/intake/scan-in-memory.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { takeIn } from "#main/intake/take-in.ts";
import { createId } from "#main/node/layout.ts";
import type { InPlaceScan } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Scans up to this size are held in memory; larger ones go through a temporary store. */
const MOST_IN_MEMORY_BYTES = 1.5e9;

/** A scan that a verb computes on. */
export interface OpenVoxels {
  readonly pyramid: VoxelPyramid;
  /** SHA-256 (hex) of the stored array. */
  readonly sha256: string;
  /** Hash of the scan that this one was cut or binned from. */
  readonly derivedFrom: string | null;
  readonly suggestedPolarity: Polarity;
  /** Known to the specimen; null = not estimated. Undefined: the scan is a bare file, which cannot say. */
  readonly blurFwhmMm: number | null | undefined;
  /** Lets go of files and temporary folders. */
  close(): Promise<void>;
}

/**
 * Opens the scan behind a path: a specimen's folder through its store, a scan's file in memory or, when it is too large, by
 * a temporary intake that `close` removes.
 * @throws unreadable-input, spacing-unsettled, misuse, cancelled
 */
export async function openVoxels(path: string, given: Vec3 | null, call: Pick<VerbCall, "io" | "say">): Promise<OpenVoxels> {
  if (existsSync(join(path, "specimen.json"))) {
    if (given) {
      const what = "--spacing is for scan files; the specimen's voxel size was settled when it was taken in.";
      throw new TautlineError("misuse", what, { what });
    }
    const store = storeVoxels(path, async () => {});
    if (store.inPlace) await checkInPlace(store.inPlace);
    return store;
  }
  const source = await openScan(path);
  try {
    const spacing = settledSpacing(source.header, source.name, given, { strict: false, say: call.say });
    const { size, dtype } = source.header;
    if (size[0] * size[1] * size[2] * BYTES_OF_DTYPE[dtype] > MOST_IN_MEMORY_BYTES)
      return await throughIntake(path, source, spacing, call);
    const scan = await readScanIntoMemory(source, spacing, call.io.signal);
    return { ...scan, derivedFrom: null, blurFwhmMm: undefined, close: async () => {} };
  } finally {
    await source.close();
  }
}

function storeVoxels(folder: string, cleanUp: () => Promise<void>): OpenVoxels & { readonly inPlace: InPlaceScan | undefined } {
  const store = openStorePyramid(folder);
  const { volume, polarity } = store.record;
  return {
    pyramid: store,
    inPlace: volume.inPlace,
    sha256: volume.sha256,
    derivedFrom: volume.derivedFrom?.sha256 ?? null,
    suggestedPolarity: polarity,
    blurFwhmMm: volume.blurFwhmMm,
    async close() {
      store.close();
      await cleanUp();
    },
  };
}

async function throughIntake(
  path: string,
  source: SliceSource,
  spacing: Vec3,
  call: Pick<VerbCall, "io" | "say">,
): Promise<OpenVoxels> {
  call.say(`${source.name}: too large for memory; a temporary store is made first.`);
  const library = await mkdtemp(join(tmpdir(), "tautline-"));
  const cleanUp = () => rm(library, { recursive: true, force: true });
  try {
    const id = createId((count) => new Uint8Array(randomBytes(count)));
    const order = {
      path,
      library,
      id,
      created: Date.now(),
      name: source.name,
      spacing,
      handedness: "unknown",
      facts: {},
    } as const;
    await takeIn(order, { signal: call.io.signal });
    const opened = storeVoxels(join(library, "specimens", id), cleanUp);
    return { ...opened, blurFwhmMm: undefined };
  } catch (error) {
    await cleanUp();
    throw error;
  }
}
