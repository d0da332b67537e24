import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { demoStudyLogs } from "#main/intake/make-demo-study.ts";
import type { DemoStudyLog } from "#main/node/abilities.ts";
import { DEMO_STUDY_ID, plantDemoStudy } from "#main/node/study/plant-demo-study.ts";
import { DEMO_PACE } from "#shared/phantom/annotator-habits.ts";
import { DEMO_STUDY_NAMES, demoStudy } from "#shared/phantom/demo-study.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { putScan, studyPlace } from "#test/main/node/study/study-place.ts";

// The specimens' scans are stand-ins of a few voxels here (their making is the intake's); logs and study are the real ones.

let root: string;
let logs: readonly DemoStudyLog[];

beforeAll(async () => {
  root = await mkdtemp(join(tmpdir(), "tautline-plant-"));
  logs = demoStudyLogs();
}, 60_000);
afterAll(() => rm(root, { recursive: true, force: true }));

async function begun(name: string) {
  const place = await studyPlace(join(root, name), { now: Date.parse("2027-02-01T09:00:00Z") });
  let made = 0;
  const scan = (specimen: string) => {
    made += 1;
    return putScan(place, specimen, plainGrid([8, 8, 8], [0.1, 0.1, 0.1]), made);
  };
  const valve = await scan(DEMO_STUDY_NAMES[0]!);
  const synthetic: string[] = [];
  const plant = (signal = new AbortController().signal) =>
    plantDemoStudy(
      {
        root: place.root,
        library: place.library,
        store: place.store,
        newId: () => "unused",
        now: () => Date.parse("2027-02-01T09:00:00Z"),
        abilities: {
          runDemoSpecimen: async (order) => {
            synthetic.push(order.name);
            return { record: await scan(order.name) };
          },
          runDemoStudyLogs: async () => logs,
        },
      },
      valve.id,
      { signal, onProgress: () => {} },
    );
  return { place, plant, synthetic, valve };
}

describe("the demo study in a library", () => {
  it("stands with its frozen protocol and all thirty passes, ready for the report", async () => {
    const { place, plant, synthetic } = await begun("whole");
    expect(await plant()).toBe(DEMO_STUDY_ID);
    expect(synthetic).toEqual(DEMO_STUDY_NAMES.slice(1));
    const view = await place.studies.study(DEMO_STUDY_ID);
    expect(view.protocol.frozen).not.toBeNull();
    expect(view.assignments).toHaveLength(30);
    const analysis = await place.studies.analysis(DEMO_STUDY_ID);
    expect(analysis).toMatchObject({ refusal: null, awaited: 0, leftOut: [] });
    const { files } = await place.studies.passes(DEMO_STUDY_ID);
    const truth = demoStudy().passes;
    expect(files).toHaveLength(truth.length);
    for (const { specimen, annotator, pass, file } of truth) {
      const planted = files.find(
        ({ file: one }) => one.volume!.name === specimen && one.annotator === annotator && one.pass === pass,
      )!;
      const nodes = (trees: typeof file.trees) => trees.map(({ name, nodes: all }) => [name, all.length]).sort();
      expect(nodes(planted.file.trees)).toEqual(nodes(file.trees));
      expect(Math.abs(Date.parse(planted.file.created!) - Date.parse(file.created!))).toBeLessThan(1000);
      expect(planted.file.crossLinks ?? []).toHaveLength(file.crossLinks?.length ?? 0);
    }
    // Nothing else is done the second time.
    await plant();
    expect(synthetic).toHaveLength(4);
  });

  it("holds effort at the pace that was put in", async () => {
    const { place, plant } = await begun("effort");
    await plant();
    const { passes } = await place.studies.analysis(DEMO_STUDY_ID);
    for (const [annotator, { secondsPerTree, takenBack }] of Object.entries(DEMO_PACE)) {
      const own = passes.filter((one) => one.annotator === annotator);
      const [trees, work, undos] = own.reduce(
        ([t, w, u], { effort }) => [t + effort.trees.length - effort.undos, w + effort.workMs, u + effort.undos],
        [0, 0, 0],
      );
      // 112 trees (56 twice), each within a fifth of the pace; a tree taken back costs half as much again and 6 seconds. Two
      // trees of HB-07 are joined by a cross-link and come together.
      const expected = trees * secondsPerTree + undos * (0.5 * secondsPerTree + 6);
      const error = (0.2 / Math.sqrt(3)) * secondsPerTree * Math.sqrt(trees + undos);
      expect(Math.abs(work / 1000 - expected)).toBeLessThan(3.29 * error);
      expect(Math.abs(undos - takenBack * trees)).toBeLessThan(3.29 * Math.sqrt(trees * takenBack * (1 - takenBack)) + 1);
    }
  });

  it("is completed when it was stopped on the way, and begun anew when a specimen was removed", async () => {
    const { place, plant, synthetic } = await begun("stopped");
    const takeIn = place.library.passes.takeIn.bind(place.library.passes);
    let left = 7;
    place.library.passes.takeIn = async (...args) => {
      if (left === 0) throw new Error("No space is left.");
      left -= 1;
      return takeIn(...args);
    };
    await expect(plant()).rejects.toThrow(/No space/);
    place.library.passes.takeIn = takeIn;
    await plant();
    const view = await place.studies.study(DEMO_STUDY_ID);
    expect(view.assignments.every(({ returned }) => returned)).toBe(true);
    const removed = view.specimens.find(({ name }) => name === "HB-09")!;
    await place.library.removeSpecimen(removed.id, true);
    await plant();
    expect(synthetic.filter((name) => name === "HB-09")).toHaveLength(2);
    expect((await place.studies.analysis(DEMO_STUDY_ID)).awaited).toBe(0);
  });
});
