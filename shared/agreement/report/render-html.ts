import type { AgreementReport, ReportBlock, ReportSection, ReportTable } from "#shared/agreement/report/report-data.ts";
import { escapeHtml, htmlPage } from "#shared/report/html-page.ts";

/** The report as one self-contained HTML page: no script, no request, printable on A4, readable in greyscale. */
export function renderReportHtml(report: AgreementReport): string {
  const contents = report.sections.map(({ id, title }) => `<li><a href="#${id}">${escapeHtml(title)}</a></li>`).join("");
  const head = `<h1>${escapeHtml(report.title)}</h1>\n<p class="quiet">${escapeHtml(report.subtitle)}</p>`;
  const body = report.sections.map(renderSection).join("\n");
  return htmlPage(report.title, `${head}\n<nav aria-label="Contents"><ol>${contents}</ol></nav>\n${body}`);
}

function renderSection({ id, title, blocks }: ReportSection): string {
  return `<section id="${id}">\n<h2>${escapeHtml(title)}</h2>\n${blocks.map(renderBlock).join("\n")}\n</section>`;
}

function renderBlock(block: ReportBlock): string {
  switch (block.kind) {
    case "text":
      return block.tone === "caution"
        ? `<p class="cautions">${escapeHtml(block.text)}</p>`
        : `<p class="${block.tone}">${escapeHtml(block.text)}</p>`;
    case "list":
      return `<ul>${block.items.map((item) => `<li>${escapeHtml(item)}</li>`).join("")}</ul>`;
    case "heading":
      return `<h3>${escapeHtml(block.text)}</h3>`;
    case "figure":
      return `<figure><div class="row">${block.svgs.join("\n")}</div><figcaption>${escapeHtml(block.caption)}</figcaption></figure>`;
    case "table":
      return renderTable(block);
  }
}

function renderTable({ caption, columns, rows, notes }: ReportTable): string {
  const side = (k: number) => (columns[k]?.words ? ' class="words"' : "");
  const head = columns.map(({ name }, k) => `<th scope="col"${side(k)}>${escapeHtml(name)}</th>`).join("");
  const body = rows
    .map((row) => {
      const cells = row.map((cell, k) =>
        k === 0 ? `<th scope="row"${side(k)}>${escapeHtml(cell)}</th>` : `<td${side(k)}>${escapeHtml(cell)}</td>`,
      );
      return `<tr>${cells.join("")}</tr>`;
    })
    .join("\n");
  const under = notes.length > 0 ? `<ul class="notes">${notes.map((note) => `<li>${escapeHtml(note)}</li>`).join("")}</ul>` : "";
  return `<div class="table"><table><caption>${escapeHtml(caption)}</caption><thead><tr>${head}</tr></thead><tbody>\n${body}\n</tbody></table>${under}</div>`;
}
