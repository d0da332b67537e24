import { expect, it } from "vitest";
import type { Abilities } from "#main/node/abilities.ts";
import { Jobs } from "#main/node/jobs.ts";
import { scanLooks } from "#main/node/scan-looks.ts";
import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import type { JobState } from "#shared/api/routes.ts";
import { unreadable } from "#shared/errors.ts";

const REQUEST = { path: "/home/someone/scans/valve.nrrd", polarity: "bright" } as const;

function looks(runProjections: Abilities["runProjections"]) {
  const told: JobState[] = [];
  let ids = 0;
  const emit = (event: unknown) => void told.push((event as { job: JobState }).job);
  const jobs = new Jobs({ now: () => 1e9 * told.length, newId: () => `job${++ids}`, emit, onFault: () => {} });
  const look = async () => {
    throw unreadable(REQUEST.path, "a scan", "nothing");
  };
  return { told, jobs, port: scanLooks({ look, runProjections }, jobs) };
}

it("a look's pictures are there once its job is done, for the last few looks", async () => {
  let made = 0;
  const { told, jobs, port } = looks(async (_, { onProgress }) => {
    onProgress({ progress: 0.5, step: "Looking through the scan", bytesPerSecond: null, secondsLeft: 3 });
    return { slices: ++made, of: 9 } as ProjectionsAnswer;
  });
  const { job } = await port.startProjections(REQUEST);
  await jobs.idle();
  expect(told.map(({ what, state, progress }) => [what, state, progress])).toEqual([
    ["look", "running", 0],
    ["look", "running", 0.5],
    ["look", "done", 1],
  ]);
  // Pictures do not go round in events.
  expect(told.at(-1)!.result).toBeUndefined();
  expect(await port.projections(job)).toEqual({ slices: 1, of: 9 });
  for (let k = 0; k < 4; k++) await port.startProjections(REQUEST);
  await jobs.idle();
  await expect(port.projections(job)).rejects.toMatchObject({ tag: "not-found" });
  expect(await port.projections("job5")).toEqual({ slices: 5, of: 9 });
});

it("a look that is cancelled stops, and a failed one names the file, not where it lies", async () => {
  const { told, jobs, port } = looks(
    (_, { signal }) => new Promise((_resolve, reject) => signal.addEventListener("abort", () => reject(new Error("stopped")))),
  );
  const { job } = await port.startProjections(REQUEST);
  jobs.cancel(job);
  await jobs.idle();
  expect(told.at(-1)).toMatchObject({ state: "cancelled" });
  await expect(port.projections(job)).rejects.toMatchObject({ tag: "not-found" });
  const failing = looks(async () => {
    throw unreadable(REQUEST.path, "a whole scan", "half of one");
  });
  await failing.port.startProjections(REQUEST);
  await failing.jobs.idle();
  expect(failing.told.at(-1)!.error!.message).toBe("valve.nrrd: expected a whole scan, found half of one.");
  await expect(failing.port.look(REQUEST)).rejects.toThrow(/^valve\.nrrd: expected a scan/);
});
