import { beforeEach, expect, test } from "vitest";
import { type LookClient, LookThrough } from "#renderer/shelf/add-scan/look-through.ts";
import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import type { JobState, ServerEvent } from "#shared/api/routes.ts";

const REQUEST = { path: "/a.nrrd", polarity: "bright" } as const;
const ANSWER = { slices: 3, of: 3 } as ProjectionsAnswer;
let listeners: Set<(event: ServerEvent) => void>;
let cancelled: string[];
let begun: ((job: string) => void)[];
let look: LookThrough;

const tell = (id: string, change: Partial<JobState>) => {
  const state: JobState = { id, what: "look", state: "running", progress: 0, step: "", bytesPerSecond: null, secondsLeft: null };
  for (const listener of listeners) listener({ event: "job", job: { ...state, ...change } });
};
const settle = () => new Promise((resolve) => setTimeout(resolve, 0));

beforeEach(() => {
  listeners = new Set();
  cancelled = [];
  begun = [];
  const client: LookClient = {
    onEvent: (listener) => {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    startProjections: () => new Promise((resolve) => begun.push((job) => resolve({ job }))),
    projections: async (job) => {
      if (job === "gone") throw new Error("not there any more");
      return ANSWER;
    },
    cancelJob: async (job) => cancelled.push(job),
  };
  look = new LookThrough(client);
});

test("a look is told how far it is, and shows its pictures at the end", async () => {
  void look.begin(REQUEST);
  expect(look.shown.value).toEqual({ state: "running", progress: 0, secondsLeft: null });
  begun[0]!("j1");
  await settle();
  tell("j1", { progress: 0.5, secondsLeft: 7 });
  tell("other", { progress: 0.9 });
  expect(look.shown.value).toEqual({ state: "running", progress: 0.5, secondsLeft: 7 });
  tell("j1", { state: "done" });
  await settle();
  expect(look.shown.value).toEqual({ state: "done", answer: ANSWER });
});

test("an end that is told before the job is named is not missed", async () => {
  void look.begin(REQUEST);
  tell("j1", { state: "done" });
  begun[0]!("j1");
  await settle();
  expect(look.shown.value.state).toBe("done");
});

test("a look that is stopped, forgotten or followed by another is cancelled, and its end changes nothing", async () => {
  void look.begin(REQUEST);
  begun[0]!("j1");
  await settle();
  look.stop();
  expect([cancelled, look.shown.value.state]).toEqual([["j1"], "stopped"]);
  tell("j1", { state: "done" });
  await settle();
  expect(look.shown.value.state).toBe("stopped");
  // Stopped before the server named it: cancelled as soon as it is known.
  void look.begin(REQUEST);
  look.forget();
  begun[1]!("j2");
  await settle();
  expect([cancelled, look.shown.value.state]).toEqual([["j1", "j2"], "none"]);
  void look.begin(REQUEST);
  begun[2]!("j3");
  await settle();
  look.close();
  expect([cancelled, listeners.size]).toEqual([["j1", "j2", "j3"], 0]);
});

test("failures are shown in their own words", async () => {
  void look.begin(REQUEST);
  begun[0]!("j1");
  await settle();
  tell("j1", { state: "failed", error: { tag: "unreadable-input", message: "slice 7 is not there" } });
  expect(look.shown.value).toEqual({ state: "failed", message: "slice 7 is not there" });
  void look.begin(REQUEST);
  begun[1]!("gone");
  await settle();
  tell("gone", { state: "done" });
  await settle();
  expect(look.shown.value).toEqual({ state: "failed", message: "not there any more" });
});
