import { beforeEach, expect, test } from "vitest";
import { type ShelfClient, ShelfModel } from "#renderer/shelf/shelf-model.ts";
import type { JobState, ServerEvent, ShelfAnswer } from "#shared/api/routes.ts";
import { shelfOfTwo } from "#test/browser/shelf/page/made-up-shelf.ts";

let listeners: ((event: ServerEvent) => void)[];
let loads: number;
let answer: () => Promise<ShelfAnswer>;
let said: string[];
let model: ShelfModel;

const job = (change: Partial<JobState>): ServerEvent => ({
  event: "job",
  job: { id: "j1", what: "intake", state: "running", progress: 0, step: "", bytesPerSecond: null, secondsLeft: null, ...change },
});
const tell = (event: ServerEvent) => {
  for (const listener of listeners) listener(event);
};
const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

beforeEach(() => {
  listeners = [];
  loads = 0;
  said = [];
  answer = async () => ({ specimens: shelfOfTwo(), problems: [] });
  const client = {
    shelf: () => {
      loads += 1;
      return answer();
    },
    onEvent: (listener: (event: ServerEvent) => void) => {
      listeners.push(listener);
      return () => {
        listeners = listeners.filter((other) => other !== listener);
      };
    },
    openDemo: async () => ({ job: "j1" }),
    openDemoStudy: async () => ({ job: "j1" }),
    cancelJob: async () => undefined,
    studies: { all: async () => ({ studies: [], assignments: [], problems: [] }) },
  } as ShelfClient;
  model = new ShelfModel(client, { failed: (error) => said.push(String(error)), news: (text) => said.push(text) });
});

test("the shelf is read at the start and after each change, and no longer once stopped", async () => {
  const stop = model.start();
  await settle();
  expect(model.answer.value?.specimens).toHaveLength(2);
  tell({ event: "shelf" });
  await settle();
  expect(loads).toBe(2);
  stop();
  expect(listeners).toEqual([]);
});

test("changes during a reading are gathered into one more reading", async () => {
  let release = () => {};
  answer = () =>
    new Promise((resolve) => {
      release = () => resolve({ specimens: [], problems: [] });
    });
  model.start();
  for (let k = 0; k < 5; k++) tell({ event: "shelf" });
  release();
  await settle();
  release();
  await settle();
  expect(loads).toBe(2);
});

test("a failure to read is told, the last known shelf stays, and a later success takes the failure back", async () => {
  model.start();
  await settle();
  answer = async () => {
    throw new Error("The library is gone.");
  };
  await model.load();
  expect(model.failure.value).toBe("The library is gone.");
  expect(model.answer.value?.specimens).toHaveLength(2);
  answer = async () => ({ specimens: [], problems: [] });
  await model.load();
  expect(model.failure.value).toBeNull();
});

test("a running job shows until it is done, then its specimen is named and the shelf read again", async () => {
  model.start();
  await settle();
  tell(job({ progress: 0.4 }));
  expect(model.jobs.value.map(({ progress }) => progress)).toEqual([0.4]);
  tell(job({ state: "done", progress: 1, result: { specimen: "a1" } }));
  await settle();
  expect(model.jobs.value).toEqual([]);
  expect(model.made.value).toBe("a1");
  expect(loads).toBe(2);
  model.forgetMade();
  expect(model.made.value).toBeNull();
});

test("the end of a job is not lost when it comes before the answer that names the job", async () => {
  model.start();
  tell(job({ what: "demo", state: "done", result: { specimen: "a1" } }));
  expect(model.made.value).toBeNull();
  await model.openDemo();
  expect(model.made.value).toBe("a1");
});

test("a failed job stays until it is put away, and does not come back", () => {
  model.start();
  tell(job({}));
  tell(job({ state: "failed", error: { tag: "disk-full", message: "The disk is full." } }));
  expect(model.jobs.value).toHaveLength(1);
  model.dismiss("j1");
  tell(job({ state: "failed" }));
  expect(model.jobs.value).toEqual([]);
});

test("a stopped job is told in a word", () => {
  model.start();
  tell(job({}));
  tell(job({ state: "cancelled" }));
  expect(model.jobs.value).toEqual([]);
  expect(said.join()).toContain("Nothing of it is left");
});

test("the demo study that this page began is known once it is made, until the person has gone on", async () => {
  model.start();
  await model.openDemoStudy();
  tell(job({ what: "demo-study", progress: 0.5 }));
  expect(model.madeStudy.value).toBeNull();
  tell(job({ what: "demo-study", state: "done", result: { study: "st1" } }));
  expect(model.madeStudy.value).toBe("st1");
  model.forgetMade();
  expect(model.madeStudy.value).toBeNull();
});
