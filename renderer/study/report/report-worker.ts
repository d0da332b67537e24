import { makeReport } from "#renderer/study/report/make-report.ts";
import type { ReportMessage, ReportOrder } from "#renderer/study/report/report-messages.ts";

// A thread of the page: statistics of many passes take their time, and the page must answer meanwhile.

const say = (message: ReportMessage) => postMessage(message);

addEventListener("message", ({ data }: MessageEvent<ReportOrder>) => {
  const began = performance.now();
  try {
    const made = makeReport(
      data,
      () => data.budgetMs - (performance.now() - began),
      (step, done, of) => say({ kind: "progress", step, done, of }),
    );
    say({ kind: "made", made });
  } catch (error) {
    say({ kind: "failed", message: error instanceof Error ? error.message : String(error) });
  }
});
