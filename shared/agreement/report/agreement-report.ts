import { aboutSection, passesSection } from "#shared/agreement/report/about-section.ts";
import type { AgreementReport, ReportContext } from "#shared/agreement/report/report-data.ts";
import { totalsSection } from "#shared/agreement/report/totals-section.ts";
import type { Agreement, AgreeOptions } from "#shared/agreement/study/agree.ts";
import type { Study } from "#shared/agreement/study/study.ts";

/** Everything that a section may draw on. */
export interface ReportInput {
  readonly study: Study;
  readonly options: AgreeOptions;
  readonly found: Agreement;
  readonly context: ReportContext;
}

/** The report on a study as sections of text, tables and drawings, totals first; every number with what it rests on. */
export function agreementReport(input: ReportInput): AgreementReport {
  const { study, context } = input;
  const { annotators, specimens } = study;
  return {
    title: context.title ?? "How far annotators agree on chordae tendineae",
    subtitle: `${counted(specimens.length, "specimen")}, ${counted(annotators.length, "annotator")}, ${counted(input.found.passes.length, "pass", "passes")}`,
    sections: [aboutSection(input), passesSection(input), totalsSection(input)],
    spread: [],
  };
}

function counted(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}
