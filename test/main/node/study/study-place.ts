import { randomBytes } from "node:crypto";
import { mkdir } from "node:fs/promises";
import { join } from "node:path";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen } from "#main/intake/make-specimen.ts";
import { makeTurned } from "#main/intake/turned/make-turned.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { Jobs } from "#main/node/jobs.ts";
import { createId } from "#main/node/layout.ts";
import { Library } from "#main/node/library.ts";
import { studyPorts } from "#main/node/study/study-ports.ts";
import type { JobResult, ServerEvent } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import type { ErrorBody } from "#shared/errors.ts";
import { decodeError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { PassHistory } from "#shared/log/history.ts";
import { emptyDocument } from "#shared/trees/document.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";
import { IdSource, NO_IDS_YET } from "#shared/trees/ids.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/** A library on the real disk with studies and packets over it; `clock` is what its computer takes for the time. */
export async function studyPlace(root: string, clock: { now: number }) {
  await mkdir(root, { recursive: true });
  const files = diskFiles();
  const random = (count: number) => new Uint8Array(randomBytes(count));
  const events: ServerEvent[] = [];
  const emit = (event: ServerEvent) => void events.push(event);
  const now = () => clock.now;
  const mayWrite = async () => {};
  const library = new Library({ root, files, random, now, mayWrite, emit });
  const faults: unknown[] = [];
  const jobs = new Jobs({ now, newId: () => createId(random), emit, onFault: (error) => void faults.push(error) });
  const abilities = { runTurned: makeTurned };
  const ports = studyPorts({ library, files, jobs, abilities, random, now, mayWrite, emit, softwareVersion: "0.1.0" });
  /** What a job made. @throws the job's error */
  const ended = async ({ job }: { job: string }): Promise<JobResult> => {
    await jobs.idle();
    const state = jobs.states().find(({ id }) => id === job)!;
    if (faults.length > 0) throw faults[0];
    if (state.error) throw decodeError({ fields: {}, ...state.error } as ErrorBody);
    return state.result!;
  };
  return { root, library, events, jobs, files, ended, ...ports };
}

export type StudyPlace = Awaited<ReturnType<typeof studyPlace>>;

/** Grey value of a stored voxel: no two voxels of a small scan are alike, so that a turn shows in the hash. */
export function greyAt(grid: VolumeGrid, seed: number, x: number, y: number, z: number): number {
  return (x + grid.size[0] * (y + grid.size[1] * z) + 7 * seed) % 65521;
}

/** Takes a small scan into a library. */
export async function putScan(place: StudyPlace, name: string, grid: VolumeGrid, seed: number): Promise<SpecimenRecord> {
  const [nx, ny] = grid.size;
  const source = sourceFromSlabs(name, grid, "uint16", (z0, z1, out) => {
    for (let z = z0, at = 0; z < z1; z += 1)
      for (let y = 0; y < ny; y += 1) for (let x = 0; x < nx; x += 1, at += 1) out[at] = greyAt(grid, seed, x, y, z);
  });
  const { record } = await makeSpecimen(source, {
    library: place.root,
    id: createId((count) => new Uint8Array(randomBytes(count))),
    name,
    created: 1_700_000_000_000 + seed,
    spacing: grid.spacing,
    handedness: "confirmed",
    polarity: "bright",
    facts: { species: "porcine", fixation: "a fixation that only this specimen had", pressure: 100 },
    landmarks: { commissures: [[1.25, 2.5, 3.75]] as never },
    synthetic: true,
    blurFwhmMm: null,
  });
  return record;
}

/** Draws a file's trees into a pass as an annotator's window does: edits a session apart, one undone and made again. */
export async function drawTrees(
  place: StudyPlace,
  specimen: string,
  pass: string,
  file: ChordaeFile,
  from: number,
): Promise<void> {
  const { lines, head, epoch } = await place.library.readLog(specimen, pass, 0);
  const history = PassHistory.fromLines(lines);
  const stamp = (second: number) => ({ t: from + 1000 * second, mono: 1000 * second, session: "sitting-one" });
  const made: string[] = [];
  const { operation, curves } = takeInTrees(emptyDocument(), new IdSource(NO_IDS_YET), { incoming: documentFromFile(file) });
  made.push(...history.commit(operation, "Trees drawn", curves, stamp(10)));
  made.push(...history.undo(stamp(20)));
  made.push(...history.redo(stamp(30)));
  await place.library.appendLog(specimen, pass, { window: "w1", epoch, base: head, lines: made });
}

/** Where packets lie between two computers. */
export async function stick(root: string): Promise<string> {
  const folder = join(root, "stick");
  await mkdir(folder, { recursive: true });
  return folder;
}
