import { signal } from "@preact/signals";
import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { middleOf, OverlookedModel, type OverlookedSource } from "#renderer/desk/model/overlooked-model.ts";
import type { ListedStretch, OverlookedAnswer } from "#shared/api/overlooked.ts";
import type { JobState } from "#shared/api/routes.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";

const stretch = (key: string, lengthMm: number): ListedStretch => ({
  key,
  lengthMm,
  from: pointMm(0, 0, 0),
  to: pointMm(lengthMm, 0, 0),
  points: [0, 0, 0, lengthMm, 0, 0],
  radiusMm: 0.2,
  dismissedBy: null,
  reason: null,
});
const job = (state: JobState["state"], more: Partial<JobState> = {}): JobState => ({
  id: "j1",
  what: "search",
  state,
  progress: 0.5,
  step: "searching",
  bytesPerSecond: null,
  secondsLeft: 60,
  ...more,
});

function modelWith(stretches: readonly ListedStretch[]) {
  const document = signal<TreeDocument>(emptyDocument());
  let answer: OverlookedAnswer = { stretches, search: { polarity: "bright", done: 4, total: 10, job: null } };
  const calls: string[] = [];
  const failures: unknown[] = [];
  let tell: (job: JobState) => void = () => undefined;
  const source: OverlookedSource = {
    list: async () => {
      calls.push("list");
      return answer;
    },
    search: async (region) => {
      calls.push(region === null ? "search" : "search here");
      return { job: "j1" };
    },
    cancel: async (id) => void calls.push(`cancel ${id}`),
    onJob: (listener) => {
      tell = listener;
      return () => void calls.push("left");
    },
    failed: (error) => void failures.push(error),
  };
  const model = new OverlookedModel(source, document, () => Date.now());
  return {
    model,
    document,
    calls,
    failures,
    tell: (state: JobState) => tell(state),
    give: (next: OverlookedAnswer) => (answer = next),
  };
}

describe("what was overlooked", () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());

  it("is not asked for before somebody looks, and follows the trees at rest from then on", async () => {
    const { model, document, calls } = modelWith([stretch("a", 3)]);
    document.value = emptyDocument();
    await vi.advanceTimersByTimeAsync(5000);
    expect(calls).toEqual([]);
    await model.look();
    expect(model.shown.value.map(({ key }) => key)).toEqual(["a"]);
    for (let i = 0; i < 5; i++) {
      document.value = { ...emptyDocument() };
      await vi.advanceTimersByTimeAsync(300);
    }
    expect(calls).toEqual(["list"]);
    await vi.advanceTimersByTimeAsync(1000);
    expect(calls).toEqual(["list", "list"]);
    model.dispose();
  });

  it("lists the longest first, those set aside last, and counts a dismissal at once", async () => {
    const { model, document } = modelWith([stretch("short", 1.5), stretch("long", 9), stretch("middle", 4)]);
    await model.look();
    expect(model.shown.value.map(({ key }) => key)).toEqual(["long", "middle", "short"]);
    document.value = { ...emptyDocument(), dismissals: new Map([["long", { key: "long", reason: "a suture" }]]) };
    expect(model.shown.value.map(({ key }) => key)).toEqual(["middle", "short", "long"]);
    expect(model.shown.value.at(-1)).toMatchObject({ dismissedBy: "long", reason: "a suture" });
    expect(model.standing.value).toHaveLength(2);
    document.value = emptyDocument();
    expect(model.standing.value).toHaveLength(3);
    model.dispose();
  });

  it("shows the search as it goes, looks again meanwhile and once it ended", async () => {
    const { model, calls, tell, give } = modelWith([]);
    await model.look();
    await model.search(null);
    expect(model.job.value).toMatchObject({ id: "j1", progress: 0 });
    tell(job("running", { id: "another" }));
    expect(model.job.value).toMatchObject({ progress: 0 });
    for (let i = 0; i < 20; i++) {
      tell(job("running"));
      await vi.advanceTimersByTimeAsync(200);
    }
    expect(model.job.value).toMatchObject({ progress: 0.5 });
    // Four seconds: the list is asked for once more, however often the job tells of itself.
    expect(calls).toEqual(["list", "search", "list"]);
    give({ stretches: [stretch("new", 2)], search: { polarity: "bright", done: 10, total: 10, job: null } });
    tell(job("done"));
    await vi.advanceTimersByTimeAsync(0);
    expect(model.job.value).toBeNull();
    expect(model.standing.value.map(({ key }) => key)).toEqual(["new"]);
    model.dispose();
  });

  it("stops the search by its job, and tells why one failed", async () => {
    const { model, calls, tell, failures } = modelWith([]);
    await model.look();
    await model.search({ from: pointMm(0, 0, 0), to: pointMm(1, 1, 1) });
    await model.stopSearch();
    expect(calls).toEqual(["list", "search here", "cancel j1"]);
    tell(job("failed", { error: { tag: "disk-full", message: "The disk is full." } }));
    expect(String(failures[0])).toContain("The disk is full.");
    model.dispose();
    expect(calls.at(-1)).toBe("left");
  });

  it("gives the middle of a stretch, on it", () => {
    const bent: ListedStretch = { ...stretch("a", 4), points: [0, 0, 0, 2, 0, 0, 2, 2, 0] };
    expect(middleOf(bent)).toEqual([2, 0, 0]);
  });
});
