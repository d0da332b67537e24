import type { AgreementReport, ReportBlock, ReportSection, ReportTable } from "#shared/agreement/report/report-data.ts";
import { escapeHtml, htmlPage } from "#shared/report/html-page.ts";

/** Tables of at most this many rows stay on one printed page. */
const SHORT_TABLE = 16;
/** Columns whose cells are all at most this long are not broken into lines. */
const WHOLE_CELL = 16;

/** The report as one self-contained HTML page: no script, no request, printable on A4, readable in greyscale. */
export function renderReportHtml(report: AgreementReport): string {
  const contents = report.sections.map(({ id, title }) => `<li><a href="#${id}">${escapeHtml(title)}</a></li>`).join("");
  const head = `<h1>${escapeHtml(report.title)}</h1>\n<p class="quiet">${escapeHtml(report.subtitle)}</p>`;
  const [first, ...others] = report.sections.map(renderSection);
  // The cautions and what this is come before everything, the list of contents included.
  const nav = `<nav aria-label="Contents"><h2>Contents</h2><ol>${contents}</ol></nav>`;
  return htmlPage(report.title, [head, first ?? "", nav, ...others].join("\n"));
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
  const isShort = columns.map((_, k) => rows.every((row) => (row[k] ?? "").length <= WHOLE_CELL));
  const side = (k: number, isHead = false) => {
    const names = [...(columns[k]?.words ? ["words"] : []), ...(isShort[k] && !isHead ? ["whole"] : [])];
    return names.length > 0 ? ` class="${names.join(" ")}"` : "";
  };
  const head = columns.map(({ name }, k) => `<th scope="col"${side(k, true)}>${escapeHtml(name)}</th>`).join("");
  const body = rows
    .map((row) => {
      const cells = row.map((cell, k) =>
        k === 0 ? `<th scope="row"${side(k)}>${escapeHtml(cell)}</th>` : `<td${side(k)}>${escapeHtml(cell)}</td>`,
      );
      return `<tr>${cells.join("")}</tr>`;
    })
    .join("\n");
  const under = notes.length > 0 ? `<ul class="notes">${notes.map((note) => `<li>${escapeHtml(note)}</li>`).join("")}</ul>` : "";
  // A wide table can be moved within its frame, also by keyboard.
  const frame = `class="table${rows.length <= SHORT_TABLE ? " short" : ""}" tabindex="0" role="region" aria-label="${escapeHtml(caption)}"`;
  return `<div ${frame}><p class="caption">${escapeHtml(caption)}</p><table><thead><tr>${head}</tr></thead><tbody>\n${body}\n</tbody></table>${under}</div>`;
}
