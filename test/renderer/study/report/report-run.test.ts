import { describe, expect, it } from "vitest";
import type { MadeReport, ReportMessage, ReportOrder } from "#renderer/study/report/report-messages.ts";
import { ReportRun, type ReportWorker } from "#renderer/study/report/report-run.ts";

class FakeWorker implements ReportWorker {
  onmessage: ReportWorker["onmessage"] = null;
  onerror: ReportWorker["onerror"] = null;
  readonly orders: ReportOrder[] = [];
  ended = false;
  postMessage(order: ReportOrder): void {
    this.orders.push(order);
  }
  terminate(): void {
    this.ended = true;
  }
  say(data: ReportMessage): void {
    this.onmessage?.({ data });
  }
}

const order = { files: [] } as unknown as ReportOrder;
const made = { html: "<html>" } as MadeReport;

function run() {
  const workers: FakeWorker[] = [];
  const report = new ReportRun(() => {
    workers.push(new FakeWorker());
    return workers.at(-1)!;
  });
  return { report, workers };
}

describe("making a report", () => {
  it("tells how far it is, and ends its thread once it is made", async () => {
    const { report, workers } = run();
    await report.start(async () => order, "these passes");
    expect(workers[0]!.orders).toEqual([order]);
    workers[0]!.say({ kind: "progress", step: "pairs", done: 1, of: 3 });
    expect(report.state.value).toEqual({ kind: "running", step: "pairs", done: 1, of: 3 });
    workers[0]!.say({ kind: "made", made });
    expect(report.state.value).toEqual({ kind: "made", made, from: "these passes" });
    expect(workers[0]!.ended).toBe(true);
  });

  it("says why it failed: in reading, in the thread, and when the thread falls silent", async () => {
    const { report, workers } = run();
    await report.start(() => Promise.reject(new Error("The pass is gone.")), "");
    expect(report.state.value).toEqual({ kind: "failed", message: "The pass is gone." });
    await report.start(async () => order, "");
    workers[0]!.say({ kind: "failed", message: "Two files are one pass." });
    expect(report.state.value).toEqual({ kind: "failed", message: "Two files are one pass." });
    await report.start(async () => order, "");
    workers[1]!.onerror?.({});
    expect(report.state.value).toMatchObject({ kind: "failed", message: expect.stringContaining("stopped without an answer") });
  });

  it("drops what an earlier start still reads when it is stopped or begun anew", async () => {
    const { report, workers } = run();
    let release = (_: ReportOrder) => {};
    const first = report.start(() => new Promise((resolve) => (release = resolve)), "old");
    report.cancel();
    release(order);
    await first;
    expect(workers).toHaveLength(0);
    expect(report.state.value).toEqual({ kind: "none" });
  });
});
