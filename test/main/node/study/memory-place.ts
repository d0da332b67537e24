import type { TurnedScanOrder } from "#main/node/abilities.ts";
import { Jobs } from "#main/node/jobs.ts";
import { createId, type RandomBytes } from "#main/node/layout.ts";
import { Library } from "#main/node/library.ts";
import { studyPorts } from "#main/node/study/study-ports.ts";
import { writeJson } from "#main/node/whole-file.ts";
import type { JobResult } from "#shared/api/routes.ts";
import type { StudyView } from "#shared/api/study.ts";
import { decodeError, type ErrorBody } from "#shared/errors.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { PassHistory } from "#shared/log/history.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";
import { turnedFrame } from "#shared/study/turn.ts";
import type { Change } from "#shared/trees/operations.ts";
import { sampleSpecimen } from "#test/main/node/sample-log.ts";
import { Killed, type UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

export const LEAD = "/lead";
export const ANNOTATOR = "/annotator";
export const STICK = "/stick";

/** Bytes that look random and repeat with the seed. */
export function seededBytes(seed: number): RandomBytes {
  const random = new SeededRandom(seed);
  return (count) => Uint8Array.from({ length: count }, () => random.below(256));
}

/** A library on a disk in memory, with studies and packets over it. A turned scan is two small files. */
export function memoryPlace(files: UnsyncedFiles, root: string, clock: { now: number }, seed = 1) {
  const random = seededBytes(seed);
  const now = () => clock.now;
  const mayWrite = async () => {};
  const emit = () => {};
  const library = new Library({ root, files, random, now, mayWrite, emit });
  const faults: unknown[] = [];
  const jobs = new Jobs({ now, newId: () => createId(random), emit, onFault: (fault) => void faults.push(fault) });
  const runTurned = async (order: TurnedScanOrder) => {
    const { grid } = turnedFrame(order.volume, order.turn);
    const plain = sampleSpecimen(order.id);
    const record = {
      ...plain,
      name: order.code,
      created: 0,
      facts: {},
      source: { ...plain.source, name: order.code },
      volume: { ...order.volume, ...grid, sha256: Buffer.from(order.code.padEnd(32, "x")).toString("hex") },
    };
    const folder = `${order.library}/specimens/${order.id}`;
    for (const [path, text] of [
      ["zarr.json", "{}"],
      ["0/c/0/0/0", `voxels of ${order.code}`],
    ] as const) {
      const whole = `${folder}/scan.ome.zarr/${path}`;
      await files.makeFolder(whole.slice(0, whole.lastIndexOf("/")));
      await files.create(whole, new TextEncoder().encode(text));
    }
    return { record };
  };
  const ports = studyPorts({ library, files, jobs, abilities: { runTurned }, random, now, mayWrite, emit, softwareVersion: "0" });
  /** What a job made. @throws the job's error, or the fault that ended the process */
  const ended = async ({ job }: { job: string }): Promise<JobResult> => {
    await jobs.idle();
    const killed = faults.find((fault) => fault instanceof Killed || (fault as Error).cause instanceof Killed);
    if (killed) throw new Killed("in a job");
    if (faults.length > 0) throw faults[0];
    const { error, result } = jobs.states().find(({ id }) => id === job)!;
    if (error) throw decodeError({ fields: {}, ...error } as ErrorBody);
    return result!;
  };
  return { library, ended, jobs, ...ports };
}

export type MemoryPlace = ReturnType<typeof memoryPlace>;

/** A lead's library with specimens and a frozen study over them; one annotator. */
export async function leadStudy(
  files: UnsyncedFiles,
  lead: MemoryPlace,
  plan: { specimens?: number; passes?: number } = {},
): Promise<StudyView> {
  const ids = Array.from({ length: plan.specimens ?? 2 }, (_, k) => `s${String(k + 1).padStart(19, "0")}`);
  for (const [k, id] of ids.entries()) {
    await files.makeFolder(lead.library.layout.specimen(id));
    const plain = sampleSpecimen(id);
    await writeJson(files, lead.library.layout.specimenFile(id), {
      ...plain,
      name: `HB-${k + 1}`,
      volume: { ...plain.volume, sha256: String(k + 1).repeat(64) },
    });
  }
  await files.makeFolder(STICK);
  const { id } = await lead.studies.create({
    name: "S",
    specimens: ids,
    training: [],
    annotators: ["AN-1"],
    passes: plan.passes ?? 1,
  });
  const content = beginningProtocol();
  await lead.studies.changeProtocol(id, { content: { ...content, analysis: { ...content.analysis, primary: "total length" } } });
  return lead.studies.freezeProtocol(id);
}

/** Draws a tree with one end into a pass; an end of kind `open` is unfinished. */
export async function drawTree(
  place: MemoryPlace,
  specimen: string,
  pass: string,
  end: "insertion" | "open",
  t = 7_000_000,
): Promise<void> {
  const { lines, head, epoch } = await place.library.readLog(specimen, pass, 0);
  const history = PassHistory.fromLines(lines);
  const tree = history.nextId("tree");
  const from = history.nextId("node");
  const to = `n${Number(from.slice(1)) + 1}` as const;
  const strand = history.nextId("strand");
  const changes: Change[] = [
    { table: "tree", id: tree, from: null, to: { id: tree, name: `ALPM-0${tree.slice(1)}`, root: from } },
    { table: "node", id: from, from: null, to: { id: from, tree, kind: "origin", position: pointMm(0, 0, 0) } },
    { table: "node", id: to, from: null, to: { id: to, tree, kind: end, position: pointMm(0.01, 0.02, 0.03) } },
    { table: "strand", id: strand, from: null, to: { id: strand, tree, from, to, curve: null, via: [] } },
  ];
  const made = history.commit({ code: "start-tree", changes }, "A tree", [], { t, mono: t % 100_000, session: "s1" });
  await place.library.appendLog(specimen, pass, { window: "w", epoch, base: head, lines: made });
}

export const assignmentAt = (study: StudyView, place: number) => study.assignments.find((one) => one.place === place)!;

/** Makes the packet of an assignment; gives its path. */
export async function packetOut(lead: MemoryPlace, study: StudyView, place: number, more: object = {}): Promise<string> {
  const request = {
    assignments: [assignmentAt(study, place).id],
    folder: STICK,
    form: "zip" as const,
    scan: "within" as const,
    sign: false,
    ...more,
  };
  const { packets } = await lead.ended(await lead.studies.makePackets(study.id, request));
  return packets![packets!.length - 1]!.path;
}

export async function takenIn(place: MemoryPlace, path: string, more: object = {}) {
  const { taken } = await place.ended(await place.packets.takeIn({ path, ...more }));
  return taken!;
}

export async function returned(place: MemoryPlace, specimen: string): Promise<string> {
  const { packets } = await place.ended(await place.packets.makeReturn(specimen, { folder: STICK, form: "zip", sign: false }));
  return packets![0]!.path;
}
