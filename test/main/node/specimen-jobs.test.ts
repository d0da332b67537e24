import { describe, expect, it } from "vitest";
import type { Abilities, DemoPass } from "#main/node/abilities.ts";
import { Jobs } from "#main/node/jobs.ts";
import { specimenJobs } from "#main/node/specimen-jobs.ts";
import { StudyStore } from "#main/node/study/study-store.ts";
import type { IntakeRequest } from "#shared/api/routes.ts";
import { unreadable } from "#shared/errors.ts";
import { CHORDAE_FORMAT, type ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { putSpecimen, sampleLibrary } from "#test/main/node/sample-library.ts";
import { sampleSpecimen } from "#test/main/node/sample-log.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

const file: ChordaeFile = {
  format: CHORDAE_FORMAT,
  version: 1,
  unit: "mm",
  frame: "LPS",
  trees: [
    {
      id: "t1",
      name: "ALPM-01",
      root: "n1",
      nodes: [
        { id: "n1", kind: "origin", position: [0, 0, 0] },
        { id: "n2", kind: "insertion", position: [0, 0, 5] },
      ],
      strands: [
        {
          id: "s1",
          from: "n1",
          to: "n2",
          points: [
            [0, 0, 0],
            [0, 0, 5],
          ],
          radii: [0.3, 0.2],
        },
      ],
    },
  ],
};
const passes: DemoPass[] = ["AN-1", "AN-2", "AN-3"].map((annotator) => ({ annotator, file }));

function begun(change: Partial<Abilities> = {}) {
  const files = new UnsyncedFiles();
  const { library, events } = sampleLibrary(files);
  let ids = 0;
  const newId = () => `job${++ids}`;
  const jobs = new Jobs({ now: () => 1, newId, emit: () => {}, onFault: () => {} });
  let made = 0;
  const abilities = {
    runDemo: async ({ id }: { id: string }) => {
      made += 1;
      const record = { ...sampleSpecimen(id), synthetic: true };
      await putSpecimen(files, library, id);
      files.tamper(library.layout.specimenFile(id), () => new TextEncoder().encode(JSON.stringify(record)));
      return { record, passes };
    },
    runDemoPasses: async () => passes,
    ...change,
  } as unknown as Abilities;
  const port = specimenJobs({
    root: "/library",
    library,
    abilities,
    jobs,
    studies: new StudyStore({ files, layout: library.layout, mayWrite: async () => {} }),
    newId,
    now: () => 1,
    emit: (event) => void events.push(event),
  });
  return { files, library, jobs, port, events, made: () => made };
}

describe("the demo valve", () => {
  it("is made once with the three annotators' passes, and opened at once afterwards", async () => {
    const { library, jobs, port, made } = begun();
    const [first, second] = await Promise.all([port.openDemo(), port.openDemo()]);
    expect(second).toEqual(first);
    await jobs.idle();
    const { specimens, problems } = await library.shelf();
    expect(problems).toEqual([]);
    expect(specimens[0]!.passes.map(({ annotator, trees, synthetic, state }) => [annotator, trees, synthetic, state])).toEqual([
      ["AN-1", 1, true, "finished"],
      ["AN-2", 1, true, "finished"],
      ["AN-3", 1, true, "finished"],
    ]);
    const { document } = await library.passes.history(specimens[0]!.specimen.id, specimens[0]!.passes[0]!.id);
    expect([...document.curves.values()].map(({ points }) => [...points])).toEqual([[0, 0, 0, 0, 0, 5]]);
    const { job } = await port.openDemo();
    await jobs.idle();
    expect(jobs.states().find(({ id }) => id === job)).toMatchObject({
      state: "done",
      result: { specimen: specimens[0]!.specimen.id },
    });
    expect(made()).toBe(1);
    // Made by the generator: it may be removed without a question.
    await library.removeSpecimen(specimens[0]!.specimen.id, false);
  });

  it("is completed when its making was interrupted after the specimen stood", async () => {
    let fail = true;
    const { library, jobs, port, made } = begun({
      runDemoPasses: async () => passes,
    });
    const create = library.passes.createFilled.bind(library.passes);
    library.passes.createFilled = async (...args) => {
      if (fail && args[1] === "AN-2") throw new Error("stopped");
      return create(...args);
    };
    await port.openDemo();
    await jobs.idle();
    expect((await library.shelf()).specimens[0]!.passes).toHaveLength(1);
    fail = false;
    await port.openDemo();
    await jobs.idle();
    expect((await library.shelf()).specimens[0]!.passes.map(({ annotator }) => annotator)).toEqual(["AN-1", "AN-2", "AN-3"]);
    expect(made()).toBe(1);
  });
});

describe("an intake", () => {
  const request: IntakeRequest = {
    path: "/home/someone/scans/hb.nrrd",
    name: "HB",
    spacing: [0.04, 0.04, 0.04],
    handedness: "unknown",
    polarity: "bright",
    facts: {},
  };

  it("gets the library's folder and a fresh id, and tells the shelf when the specimen stands", async () => {
    const orders: unknown[] = [];
    const { jobs, port, events } = begun({
      runIntake: async (order) => {
        orders.push(order);
        return { record: sampleSpecimen(order.id) };
      },
    });
    const { job } = await port.startIntake(request);
    await jobs.idle();
    expect(orders).toEqual([{ ...request, library: "/library", id: "job2", created: 1 }]);
    expect(port.jobs().find(({ id }) => id === job)).toMatchObject({ state: "done", result: { specimen: "job2" } });
    expect(events).toContainEqual({ event: "shelf" });
  });

  it("fails in words that name the file and not where it lies", async () => {
    const { jobs, port } = begun({
      runIntake: async ({ path }) => {
        throw unreadable(path, "a scan", "something else");
      },
    });
    await port.startIntake(request);
    await jobs.idle();
    expect(port.jobs()[0]!.error).toEqual({
      tag: "unreadable-input",
      message: "hb.nrrd: expected a scan, found something else.",
    });
  });
});
