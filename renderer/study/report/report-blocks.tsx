import { useEffect, useRef } from "preact/hooks";
import { drawingOf } from "#renderer/study/report/drawing.ts";
import type { ReportBlock, ReportTable } from "#shared/agreement/report/report-data.ts";

/** One block of a report as the page shows it; the HTML file shows the same. */
export function Block({ block }: { readonly block: ReportBlock }) {
  switch (block.kind) {
    case "text":
      return <p class={`report-text ${block.tone}`}>{block.text}</p>;
    case "heading":
      return <h3>{block.text}</h3>;
    case "list":
      return (
        <ul class="report-list">
          {block.items.map((item) => (
            <li key={item}>{item}</li>
          ))}
        </ul>
      );
    case "figure":
      return (
        <figure class="report-figure">
          {block.svgs.map((svg) => (
            <Drawing key={svg} svg={svg} />
          ))}
          <figcaption class="soft">{block.caption}</figcaption>
        </figure>
      );
    case "table":
      return <Table table={block} />;
  }
}

function Drawing({ svg }: { readonly svg: string }) {
  const host = useRef<HTMLDivElement>(null);
  useEffect(() => {
    host.current!.replaceChildren(drawingOf(svg) ?? "This drawing cannot be shown.");
  }, [svg]);
  return <div ref={host} class="report-drawing" />;
}

function Table({ table }: { readonly table: ReportTable }) {
  const { caption, columns, rows, notes } = table;
  const side = (k: number) => (columns[k]?.words ? "words" : "");
  return (
    <div class="report-table">
      <section class="report-scroll" aria-label={caption} tabIndex={0}>
        <table>
          <caption>{caption}</caption>
          <thead>
            <tr>
              {columns.map(({ name }, k) => (
                <th key={name} scope="col" class={side(k)}>
                  {name}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {rows.map((row, r) => (
              // Rows have no names of their own and never change places.
              <tr key={`${r} ${row[0]}`}>
                {row.map((cell, k) =>
                  k === 0 ? (
                    <th key={columns[k]?.name ?? k} scope="row" class={side(k)}>
                      {cell}
                    </th>
                  ) : (
                    <td key={columns[k]?.name ?? k} class={side(k)}>
                      {cell}
                    </td>
                  ),
                )}
              </tr>
            ))}
          </tbody>
        </table>
      </section>
      {notes.length === 0 ? null : (
        <ul class="report-notes soft">
          {notes.map((note) => (
            <li key={note}>{note}</li>
          ))}
        </ul>
      )}
    </div>
  );
}
