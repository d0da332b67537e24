import type { AgreementReport, ReportContext } from "#shared/agreement/report/report-data.ts";
import type { AgreeOptions } from "#shared/agreement/study/agree.ts";
import type { StudyFile } from "#shared/agreement/study/study.ts";

/** What the page asks of the worker that makes a report. */
export interface ReportOrder {
  readonly files: readonly StudyFile[];
  readonly options: AgreeOptions;
  readonly context: ReportContext;
  /** Sentences on the study that the files do not hold; they stand among the report's notes. */
  readonly notes: readonly string[];
  /** Wall time for the edit distances of all pairs, milliseconds. */
  readonly budgetMs: number;
}

/** A report in every form it is shown or kept in. */
export interface MadeReport {
  readonly report: AgreementReport;
  /** One self-contained page. */
  readonly html: string;
  /** The item table in long form. */
  readonly itemsCsv: string;
}

export type ReportStep = "sorting" | "pairs" | "statistics" | "report";

/** What the worker says. */
export type ReportMessage =
  | { readonly kind: "progress"; readonly step: ReportStep; readonly done: number; readonly of: number }
  | { readonly kind: "made"; readonly made: MadeReport }
  | { readonly kind: "failed"; readonly message: string };
