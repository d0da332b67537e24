import { Block } from "#renderer/study/report/report-blocks.tsx";
import { SpreadSpace } from "#renderer/study/report/spread-space.tsx";
import type { AgreementReport } from "#shared/agreement/report/report-data.ts";

/** Section that says where in space annotators differ. */
const WHERE = "where";

/** The report on the page: the same sections as the file, with their contents at the side and space to be turned. */
export function ReportView({ report }: { readonly report: AgreementReport }) {
  const show = (id: string) => {
    const section = document.getElementById(`report-${id}`);
    section?.scrollIntoView({ block: "start" });
    section?.focus({ preventScroll: true });
  };
  return (
    <div class="report-view">
      <nav class="report-contents" aria-label="Contents of the report">
        <ol>
          {report.sections.map(({ id, title }) => (
            <li key={id}>
              <button type="button" class="button plain" onClick={() => show(id)}>
                {title}
              </button>
            </li>
          ))}
        </ol>
      </nav>
      <article class="pane report" aria-label={report.title}>
        <h2 class="report-title">{report.title}</h2>
        <p class="soft">{report.subtitle}</p>
        {report.sections.map(({ id, title, blocks }) => (
          <section key={id} id={`report-${id}`} tabIndex={-1} aria-labelledby={`report-title-${id}`}>
            <h2 id={`report-title-${id}`}>{title}</h2>
            {blocks.map((block, k) => (
              // Blocks have no names and never change places.
              <Block key={`${id} ${k}`} block={block} />
            ))}
            {id === WHERE && report.spread.length > 0 ? <SpreadSpace spread={report.spread} /> : null}
          </section>
        ))}
      </article>
    </div>
  );
}
