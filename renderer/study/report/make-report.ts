import type { MadeReport, ReportOrder, ReportStep } from "#renderer/study/report/report-messages.ts";
import { agreementReport } from "#shared/agreement/report/agreement-report.ts";
import { renderReportHtml } from "#shared/agreement/report/render-html.ts";
import { agreementFrame, assembleAgreement } from "#shared/agreement/study/agree.ts";
import { itemsCsv } from "#shared/agreement/study/items-csv.ts";
import { comparePassPairs, passPairs } from "#shared/agreement/study/pairwise.ts";
import { studyOf } from "#shared/agreement/study/study.ts";

/**
 * The report on a study, with the numbers that the command line's `agree` gives on the same files and options.
 * @param timeLeft milliseconds until edit distances are given by their bounds. @param tell hears how far it is.
 * @throws TautlineError misuse or other-scan, when the files are no study.
 */
export function makeReport(
  { files, options, context, notes }: ReportOrder,
  timeLeft: () => number,
  tell: (step: ReportStep, done: number, of: number) => void,
): MadeReport {
  const { tolerance, merge } = options.compare;
  tell("sorting", 0, 1);
  const study = studyOf(files, merge, options.method);
  const pairs = passPairs(study.specimens);
  // One by one, so that the progress is known; what is left of the time is shared evenly, as everywhere.
  const compared = pairs.flatMap((pair, k) => {
    tell("pairs", k, pairs.length);
    const until = timeLeft() - timeLeft() / (pairs.length - k);
    return comparePassPairs([pair], options.compare, () => timeLeft() - until);
  });
  tell("statistics", 0, 1);
  const frame = agreementFrame(study, options);
  const found = assembleAgreement({ ...frame, notes: [...frame.notes, ...notes] }, compared);
  tell("report", 0, 1);
  const report = agreementReport({ study, options, found, context });
  return { report, html: renderReportHtml(report), itemsCsv: itemsCsv(files, tolerance, merge, options.method) };
}
