import { type CellWords, cellWords, passGrid } from "#renderer/study/passes/grid.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";

export interface PassGridTableProps {
  readonly view: StudyView;
  readonly training: boolean;
  /** Id of the assignment that is looked at; null = none. */
  readonly selected: string | null;
  readonly select: (assignment: string) => void;
}

/** The grid as a table; a cell is a button that shows more. */
export function PassGridTable({ view, training, selected, select }: PassGridTableProps) {
  const { columns, rows } = passGrid(view, training);
  const passes = training ? 1 : view.passes;
  const caption = training ? "Training round: specimens by annotators" : "Passes: specimens by annotators and passes";
  return (
    <section class="grid-scroll pane" aria-label={caption} tabIndex={0}>
      <table class="pass-grid">
        <caption class="unseen">{caption}</caption>
        <thead>
          <tr>
            <th scope="col" rowSpan={2}>
              Specimen
            </th>
            {view.annotators.map(({ name }) => (
              <th key={name} scope="colgroup" colSpan={passes}>
                {name}
              </th>
            ))}
          </tr>
          <tr>
            {columns.map(({ annotator, pass }) => (
              <th key={`${annotator} ${pass}`} scope="col" class="soft">
                {training ? "training" : `pass ${pass}`}
              </th>
            ))}
          </tr>
        </thead>
        <tbody onKeyDown={moveAmongCells}>
          {rows.map(({ specimen, cells }) => (
            <tr key={specimen.id}>
              <th scope="row">{specimen.name}</th>
              {cells.map((cell, k) => (
                <td key={`${columns[k]!.annotator} ${columns[k]!.pass}`}>
                  <Cell cell={cell} selected={cell !== null && cell.id === selected} select={select} />
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  );
}

const STEPS: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [0, -1],
  ArrowRight: [0, 1],
  ArrowUp: [-1, 0],
  ArrowDown: [1, 0],
};

/** Arrow keys go from cell to cell, over those that are not drawn. */
function moveAmongCells(event: KeyboardEvent & { readonly currentTarget: HTMLElement }): void {
  const step = STEPS[event.key];
  const from = event.target instanceof Element ? event.target.closest("td") : null;
  if (step === undefined || from === null) return;
  event.preventDefault();
  const rows = [...event.currentTarget.querySelectorAll("tr")].map((row) => [...row.querySelectorAll("td")]);
  let row = rows.findIndex((cells) => cells.includes(from));
  let column = rows[row]!.indexOf(from);
  for (;;) {
    row += step[0];
    column += step[1];
    const cell = rows[row]?.[column];
    if (cell === undefined) return;
    const button = cell.querySelector("button");
    if (button === null) continue;
    button.focus();
    return;
  }
}

function Cell({
  cell,
  selected,
  select,
}: {
  readonly cell: AssignmentCell | null;
  readonly selected: boolean;
  readonly select: (assignment: string) => void;
}) {
  const words = cellWords(cell);
  if (cell === null) return <CellText words={words} />;
  return (
    <button type="button" class="pass-cell" aria-pressed={selected} onClick={() => select(cell.id)}>
      <CellText words={words} />
    </button>
  );
}

function CellText({ words: { kind, mark, word, more } }: { readonly words: CellWords }) {
  return (
    <span class="cell-text">
      <span class={`cell-mark ${kind}`} aria-hidden="true">
        {mark}
      </span>
      <span>
        <span class="cell-word">{word}</span>
        {more === "" ? null : <span class="soft cell-more"> {more}</span>}
      </span>
    </span>
  );
}
