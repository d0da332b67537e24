/** `text` as HTML text or attribute value. */
export function escapeHtml(text: string): string {
  return text.replaceAll("&", "&amp;").replaceAll("<", "&lt;").replaceAll(">", "&gt;").replaceAll('"', "&quot;");
}

/** Cautions that every report carries. */
export const REPORT_CAUTIONS =
  "Research use only. Not a medical device; not for diagnosis, monitoring, planning or treatment. Measurements carry uncertainty from scan and annotator. Questions about a person's health belong to a licensed clinician; donor consent, tissue and data follow local law and the institution's rules.";

const STYLE = `
:root { color-scheme: light; --ink: #1c2126; --quiet: #57616b; --line: #c9d0d6; --paper: #ffffff; }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 60rem; padding: 2rem 1.5rem 3rem; background: var(--paper); color: var(--ink); font: 15px/1.5 system-ui, "DejaVu Sans", sans-serif; }
h1 { font-size: 1.6rem; line-height: 1.25; margin: 0 0 .25rem; }
h2 { font-size: 1.15rem; margin: 2rem 0 .5rem; border-top: 1px solid var(--line); padding-top: 1rem; break-after: avoid; }
p { max-width: 46rem; }
.quiet { color: var(--quiet); }
.cautions { border: 1px solid var(--line); border-left: 4px solid var(--ink); padding: .6rem .9rem; margin: 1rem 0; }
table { border-collapse: collapse; margin: .75rem 0; font-variant-numeric: tabular-nums; }
caption { text-align: left; color: var(--quiet); padding-bottom: .3rem; }
th, td { padding: .25rem .7rem; border-bottom: 1px solid var(--line); text-align: right; vertical-align: top; }
th:first-child, td:first-child { text-align: left; padding-left: 0; }
th { font-weight: 600; }
tbody th { font-weight: 400; }
thead th { vertical-align: bottom; }
th.words, td.words { text-align: left; }
td.whole, th.whole { white-space: nowrap; }
.table { overflow-x: auto; margin: .75rem 0 1.25rem; }
.table > table { margin: 0; }
.caption { color: var(--quiet); margin: 0 0 .3rem; }
.notes { list-style: none; margin: .35rem 0 0; padding: 0; color: var(--quiet); font-size: .86em; max-width: 52rem; }
.notes li { padding-left: 1.6em; text-indent: -1.6em; }
.refusal { border-left: 3px double var(--ink); padding-left: .7rem; font-style: italic; }
h3 { font-size: 1rem; margin: 1.6rem 0 .3rem; break-after: avoid; }
nav ol { columns: 2; column-gap: 2rem; max-width: 46rem; padding-left: 1.5rem; }
nav a { color: inherit; display: inline-block; padding: .2rem 0; }
figure { margin: 1rem 0; break-inside: avoid; }
figcaption { color: var(--quiet); max-width: 46rem; }
svg { max-width: 100%; height: auto; }
.row { display: flex; flex-wrap: wrap; gap: 1.25rem; }
@page { size: A4; margin: 16mm 16mm 18mm; @bottom-left { content: "Research use only"; font: 8pt system-ui, sans-serif; color: #57616b; } @bottom-right { content: "page " counter(page) " of " counter(pages); font: 8pt system-ui, sans-serif; color: #57616b; } }
@media print {
  body { padding: 0; max-width: none; font-size: 9.5pt; }
  a { color: inherit; text-decoration: none; }
  nav { break-inside: avoid; }
  nav a { padding: 0; }
  p, ul, .notes, figcaption { max-width: none; orphans: 3; widows: 3; }
  table { font-size: 8pt; }
  th, td { padding: .18rem .4rem; }
  .notes { font-size: 7.5pt; }
  .table { overflow: visible; }
  p:has(+ .table.short), p:has(+ figure) { break-after: avoid; break-inside: avoid; }
  .table.short, tr, figure, .cautions, li { break-inside: avoid; }
  caption, .caption { break-after: avoid; }
  thead { display: table-header-group; }
  .row svg[width="330"] { width: 48.5%; }
}
`;

/** A whole self-contained page: no script, no request, printable on A4, readable in greyscale. @param body HTML already escaped where it must be */
export function htmlPage(title: string, body: string): string {
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'; img-src data:">
<title>${escapeHtml(title)}</title>
<style>${STYLE}</style>
</head>
<body>
<main>
${body}
</main>
</body>
</html>
`;
}

/** An HTML table; cells are text and get escaped. @param caption one line above it */
export function htmlTable(caption: string, header: readonly string[], rows: readonly (readonly string[])[]): string {
  const head = header.map((cell) => `<th scope="col">${escapeHtml(cell)}</th>`).join("");
  const body = rows
    .map(
      (row) =>
        `<tr>${row.map((cell, k) => (k === 0 ? `<th scope="row">${escapeHtml(cell)}</th>` : `<td>${escapeHtml(cell)}</td>`)).join("")}</tr>`,
    )
    .join("\n");
  return `<table><caption>${escapeHtml(caption)}</caption><thead><tr>${head}</tr></thead><tbody>\n${body}\n</tbody></table>`;
}
