import { describe, expect, it } from "vitest";
import { CRASH_POINTS, type CrashPoint, PACKET_CRASH_POINTS } from "#main/node/file-port.ts";
import {
  ANNOTATOR,
  assignmentAt,
  drawTree,
  LEAD,
  leadStudy,
  memoryPlace,
  packetOut,
  returned,
  STICK,
  takenIn,
} from "#test/main/node/study/memory-place.ts";
import { Killed, type Stop, UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

/** What the two people were told has been done. */
interface Told {
  packet?: string;
  specimen?: string;
  pass?: string;
  drawn?: boolean;
  back?: string;
  taken?: boolean;
}

/**
 * An assignment goes out, is drawn and comes back; whatever was told done is not done again. Both libraries lie on one disk, which
 * stops at a named point; then both start anew and go on.
 */
async function round(files: UnsyncedFiles, studyId: string, told: Told): Promise<void> {
  const lead = memoryPlace(files, LEAD, { now: 1_000_000 }, 11);
  const annotator = memoryPlace(files, ANNOTATOR, { now: 5 }, 12);
  for (const place of [lead, annotator]) {
    await place.library.removeLeftovers();
    await place.store.removeLeftovers();
    await files.remove(place.library.layout.unfinished);
  }
  const study = await lead.studies.study(studyId);
  if (!told.packet) {
    // A packet that stands although nobody was told is made anew once a person has moved it away.
    await files.remove(`${STICK}/${assignmentAt(study, 1).code}-assignment.zip`);
    told.packet = await packetOut(lead, study, 1);
  }
  if (!told.pass) {
    const { specimen, pass } = await takenIn(annotator, told.packet);
    Object.assign(told, { specimen, pass: pass! });
  }
  if (!told.drawn) {
    if ((await annotator.library.readLog(told.specimen!, told.pass!, 0)).head.seq === 0)
      await drawTree(annotator, told.specimen!, told.pass!, "insertion");
    told.drawn = true;
  }
  if (!told.back) {
    const { code, state } = await annotator.packets.assignment(told.specimen!);
    if (state === "returned") await annotator.packets.reopen(told.specimen!);
    await files.remove(`${STICK}/${code}-return.zip`);
    told.back = await returned(annotator, told.specimen!);
  }
  await takenIn(lead, told.back);
  told.taken = true;
}

/** The disk before anything travels, made once: every round has a copy of its own. */
const begun = once(async () => {
  const files = new UnsyncedFiles();
  const { id } = await leadStudy(files, memoryPlace(files, LEAD, { now: 1_000_000 }, 1), { specimens: 1 });
  await files.makeFolder(ANNOTATOR);
  await files.makeFolder(`${ANNOTATOR}/specimens`);
  return { files, study: id };
});

function once(make: () => Promise<{ files: UnsyncedFiles; study: string }>) {
  let made: ReturnType<typeof make> | null = null;
  return async () => {
    made ??= make();
    const { files, study } = await made;
    return { files: files.afterStop("kill"), study };
  };
}

/** The end that every way must lead to: one pass, whole, in its place, and the study says so. */
async function checkEnd(files: UnsyncedFiles, id: string): Promise<void> {
  const lead = memoryPlace(files, LEAD, { now: 1_000_000 }, 21);
  const study = await lead.studies.study(id);
  const { specimen, returned: pass } = assignmentAt(study, 1);
  expect(pass).toMatchObject({ trees: 1, openEnds: 0 });
  const { specimens, problems } = await lead.library.shelf();
  expect(problems).toEqual([]);
  expect((await lead.studies.studies()).problems).toEqual([]);
  expect(specimens.find((one) => one.specimen.id === specimen)!.passes).toMatchObject([
    { id: pass!.pass, annotator: "AN-1", number: 1, trees: 1, edits: 1, state: "finished" },
  ]);
  const annotator = memoryPlace(files, ANNOTATOR, { now: 5 }, 22);
  expect(await annotator.library.shelf()).toEqual({ specimens: [], problems: [] });
  expect((await annotator.studies.studies()).assignments).toMatchObject([{ state: "returned" }]);
  // A pass's folder without a journal is none, also for the library; nothing else is left half-made.
  const isNoPass = (path: string) => path.endsWith("journal.jsonl.unfinished");
  expect(files.paths().filter((path) => path.includes("unfinished") && !isNoPass(path))).toEqual([]);
}

const POINTS: readonly CrashPoint[] = [
  ...PACKET_CRASH_POINTS,
  ...CRASH_POINTS.filter(
    (point) => point.startsWith("whole-file") || point.startsWith("pass") || point === "journal:after-create",
  ),
];

describe.each<Stop>(["kill", "power-cut", "torn"])("a process that ends by %s while packets travel", (stop) => {
  it.each(POINTS)("at %s completes the round without loss and without a second pass", async (point) => {
    let stops = 0;
    for (let nth = 1; nth < 100; nth += 1) {
      const { files, study } = await begun();
      files.stopAt = { point, nth };
      const told: Told = {};
      const killed = await round(files, study, told).then(
        () => false,
        (error) => {
          if (!(error instanceof Killed) && !(error?.cause instanceof Killed)) throw error;
          return true;
        },
      );
      if (!killed) break;
      stops += 1;
      const after = files.afterStop(stop);
      await round(after, study, told);
      await checkEnd(after, study);
    }
    expect(stops, `${point} is never reached`).toBeGreaterThan(0);
  });
});

describe("a round that is not stopped", () => {
  it("ends where every stopped one must end", async () => {
    const { files, study } = await begun();
    await round(files, study, {});
    await checkEnd(files, study);
  });
});
