import type { ReportContext } from "#shared/agreement/report/report-data.ts";
import type { Agreement, AgreeOptions } from "#shared/agreement/study/agree.ts";
import type { Study } from "#shared/agreement/study/study.ts";

/** Everything that a section may draw on. */
export interface ReportInput {
  readonly study: Study;
  readonly options: AgreeOptions;
  /** The agreement of this study with these options. */
  readonly found: Agreement;
  readonly context: ReportContext;
}
