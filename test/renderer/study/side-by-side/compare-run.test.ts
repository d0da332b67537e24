import { describe, expect, it } from "vitest";
import { CompareRun } from "#renderer/study/side-by-side/compare-run.ts";
import type { CompareOptions, Comparison } from "#shared/compare/comparison.ts";
import { FakeWorker } from "#test/renderer/study/side-by-side/fake-worker.ts";

const order = { a: { trees: [] }, b: { trees: [] }, options: {} as CompareOptions, budgetMs: 1000 };
const comparison = { pairs: [] } as unknown as Comparison;

function newRun() {
  const workers: FakeWorker[] = [];
  const run = new CompareRun(() => {
    const worker = new FakeWorker();
    workers.push(worker);
    return worker;
  });
  return { run, workers };
}

describe("a comparison in a thread of its own", () => {
  it("runs, tells its progress, and is done; the thread ends then", () => {
    const { run, workers } = newRun();
    expect(run.state.value.kind).toBe("idle");
    run.start(order);
    expect(workers[0]!.orders).toEqual([{ ...order, what: "compare", merges: [] }]);
    const progress = { stage: "pairs", begun: 3, of: 9 } as const;
    workers[0]!.say({ kind: "progress", progress });
    expect(run.state.value).toEqual({ kind: "running", progress });
    workers[0]!.say({ kind: "compared", comparison });
    expect(run.state.value).toEqual({ kind: "done", comparison });
    expect(workers[0]!.ended).toBe(true);
  });

  it("ends the one before when it is asked for anew, and hears nothing more of it", () => {
    const { run, workers } = newRun();
    run.start(order);
    const stale = workers[0]!.onmessage;
    run.start(order);
    expect(workers[0]!.ended).toBe(true);
    expect(workers[0]!.onmessage).toBeNull();
    expect(stale).not.toBeNull();
    expect(run.state.value.kind).toBe("running");
  });

  it("can be stopped, and only while it runs", () => {
    const { run, workers } = newRun();
    run.cancel();
    expect(run.state.value.kind).toBe("idle");
    run.start(order);
    run.cancel();
    expect(run.state.value.kind).toBe("cancelled");
    expect(workers[0]!.ended).toBe(true);
  });

  it("says why it failed: by its own message, by a fault of the thread, or when no thread can be made", () => {
    const { run, workers } = newRun();
    run.start(order);
    workers[0]!.say({ kind: "failed", message: "no root" });
    expect(run.state.value).toEqual({ kind: "failed", message: "no root" });
    run.start(order);
    workers[1]!.onerror!({});
    expect(run.state.value).toEqual({ kind: "failed", message: expect.stringContaining("stopped without an answer") });
    const refused = new CompareRun(() => {
      throw new Error("not allowed here");
    });
    refused.start(order);
    expect(refused.state.value).toEqual({ kind: "failed", message: "not allowed here" });
  });

  it("answers for other merge tolerances beside what runs", async () => {
    const { run, workers } = newRun();
    run.start(order);
    const asked = run.atMerges({ ...order, merges: [0, 0.3] });
    workers[1]!.say({ kind: "merges", merges: [{ merge: 0, whole: 0.5 }] });
    expect(await asked).toEqual([{ merge: 0, whole: 0.5 }]);
    expect(workers.map((worker) => worker.ended)).toEqual([false, true]);
    const failing = run.atMerges({ ...order, merges: [] });
    workers[2]!.say({ kind: "failed", message: "no" });
    await expect(failing).rejects.toThrow("no");
  });
});
