import { describe, expect, it } from "vitest";
import { Jobs, type Progress } from "#main/node/jobs.ts";
import type { JobState, ServerEvent } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";

function started() {
  const events: JobState[] = [];
  const faults: unknown[] = [];
  let ids = 0;
  let time = 0;
  const jobs = new Jobs({
    now: () => time,
    newId: () => `j${++ids}`,
    emit: (event: ServerEvent) => void (event.event === "job" && events.push(event.job)),
    onFault: (error) => void faults.push(error),
  });
  return { jobs, events, faults, pass: (ms: number) => (time += ms) };
}

const at = (progress: number): Progress => ({ progress, step: "Working", bytesPerSecond: 5, secondsLeft: 2 });

describe("Jobs", () => {
  it("tell how far they are at most five times a second, and always how they end", async () => {
    const { jobs, events, pass } = started();
    jobs.start("intake", async (report) => {
      for (let i = 1; i <= 10; i += 1) {
        pass(50);
        report(at(i / 10));
      }
      return { specimen: "s1" };
    });
    await jobs.idle();
    expect(events.map(({ progress }) => progress)).toEqual([0, 0.4, 0.8, 1]);
    expect(events[1]).toMatchObject({ state: "running", step: "Working", bytesPerSecond: 5, secondsLeft: 2 });
    expect(events.at(-1)).toMatchObject({ state: "done", result: { specimen: "s1" }, bytesPerSecond: null });
    expect(jobs.states()).toHaveLength(1);
  });

  it("stop when they are cancelled, whatever the work throws then", async () => {
    const { jobs, events, faults } = started();
    const { job } = jobs.start("intake", async (_report, signal) => {
      await new Promise((resolve) => signal.addEventListener("abort", resolve));
      throw new Error("stopped in the middle");
    });
    expect(jobs.busy).toBe(true);
    jobs.cancel(job);
    await jobs.idle();
    expect(events.at(-1)).toMatchObject({ state: "cancelled" });
    expect(faults).toEqual([]);
    jobs.cancel(job);
    expect(() => jobs.cancel("none")).toThrow(expect.objectContaining({ tag: "not-found" }));
  });

  it("fail with the sentence of an expected error; a fault of the program is reported inside and told without its text", async () => {
    const { jobs, events, faults } = started();
    jobs.start("intake", async () => {
      throw new TautlineError("disk-full", "The disk is full.", { file: "x", needed: 2, free: 1 });
    });
    await jobs.idle();
    expect(events.at(-1)).toMatchObject({ state: "failed", error: { tag: "disk-full", message: "The disk is full." } });
    expect(faults).toEqual([]);
    jobs.start("intake", async () => {
      throw new TypeError("/home/secret");
    });
    await jobs.idle();
    expect(events.at(-1)).toMatchObject({ state: "failed", error: { tag: "internal" } });
    expect(JSON.stringify(events)).not.toContain("secret");
    expect(faults).toHaveLength(1);
  });

  it("keep the last ones for pages that are reloaded, and stop all at the end", async () => {
    const { jobs } = started();
    for (let i = 0; i < 30; i += 1) jobs.start("demo", async () => undefined);
    await jobs.idle();
    expect(jobs.states()).toHaveLength(20);
    jobs.start(
      "demo",
      (_report, signal) => new Promise((_, reject) => signal.addEventListener("abort", () => reject(new Error()))),
    );
    await jobs.close();
    expect(jobs.states().at(-1)).toMatchObject({ state: "cancelled" });
  });
});
