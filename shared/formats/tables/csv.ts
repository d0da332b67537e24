import { unreadable } from "#shared/errors.ts";

/** Rows as comma-separated text: quotes where needed, lines end with CR LF. @source RFC 4180. */
export function writeCsv(rows: readonly (readonly (string | number | boolean | null | undefined)[])[]): string {
  const cell = (value: string | number | boolean | null | undefined) => {
    const text = value === null || value === undefined ? "" : String(value);
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
  };
  return rows.map((row) => `${row.map(cell).join(",")}\r\n`).join("");
}

/**
 * Rows of a comma-separated text with a header line, as records by column name; lines may end with LF too.
 * @throws unreadable-input for a quote that is not closed, or rows that are not as long as the header. @source RFC 4180.
 */
export function readCsv(text: string, fileName: string): Record<string, string>[] {
  const rows = cellsOf(text.startsWith("\uFEFF") ? text.slice(1) : text, fileName);
  const [header, ...body] = rows;
  if (!header || header.every((name) => name === "")) throw unreadable(fileName, "a header line", "none");
  return body.map((row, i) => {
    if (row.length !== header.length) throw unreadable(fileName, `${header.length} cells`, String(row.length), `row ${i + 2}`);
    return Object.fromEntries(header.map((name, k) => [name, row[k]!]));
  });
}

function cellsOf(text: string, fileName: string): string[][] {
  const rows: string[][] = [];
  let row: string[] = [];
  let at = 0;
  while (at < text.length) {
    let cell: string;
    if (text[at] === '"') {
      let end = at + 1;
      for (;;) {
        end = text.indexOf('"', end);
        if (end < 0) throw unreadable(fileName, "a closing quote", "the end of the file", `row ${rows.length + 1}`);
        if (text[end + 1] !== '"') break;
        end += 2;
      }
      cell = text.slice(at + 1, end).replaceAll('""', '"');
      at = end + 1;
      if (at < text.length && !",\r\n".includes(text[at]!))
        throw unreadable(fileName, "a comma or a line end after a quote", `'${text[at]}'`, `row ${rows.length + 1}`);
    } else {
      let end = at;
      while (end < text.length && !",\r\n".includes(text[end]!)) end += 1;
      cell = text.slice(at, end);
      at = end;
    }
    row.push(cell);
    if (text[at] === ",") {
      at += 1;
      if (at === text.length) row.push("");
      continue;
    }
    if (text[at] === "\r") at += 1;
    if (text[at] === "\n") at += 1;
    rows.push(row);
    row = [];
  }
  if (row.length > 0) rows.push(row);
  return rows;
}
