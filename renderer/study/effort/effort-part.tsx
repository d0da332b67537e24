import { dateWords, workWords } from "#renderer/shelf/words.ts";
import { type EffortRow, effortRows, effortSums } from "#renderer/study/effort/effort-rows.ts";
import type { StudyView } from "#shared/api/study.ts";

/** What went into the passes that came back, from their logs. */
export function EffortPart({ view }: { readonly view: StudyView }) {
  const rows = effortRows(view);
  if (rows.length === 0) {
    return (
      <section class="pane study-part study-empty" aria-label="Effort">
        <h2>No pass has come back yet</h2>
        <p class="soft">
          Time at work, edits and undos of each pass stand here once its packet is taken in. They come from the log of the pass,
          which every edit goes into with its time.
        </p>
      </section>
    );
  }
  const idleSeconds = [...new Set(rows.map(({ returned }) => returned.effort.idleThresholdMs / 1000))];
  return (
    <section class="pane study-part" aria-labelledby="effort-title">
      <h2 id="effort-title">What went into the passes</h2>
      <p class="soft study-lead">
        From the logs: time at work leaves out pauses of more than {idleSeconds.join(" or ")} seconds between two acts.
        Interactions are edits, undos and redos. Dates are by the annotator's own clock.
      </p>
      <section class="report-scroll" aria-label="Effort of each annotator" tabIndex={0}>
        <table class="report-plain">
          <caption>Each annotator</caption>
          <thead>
            <tr>
              <th scope="col" class="words">
                annotator
              </th>
              <th scope="col">passes</th>
              <th scope="col">time at work</th>
              <th scope="col">time per tree</th>
              <th scope="col">trees</th>
              <th scope="col">edits</th>
              <th scope="col">undos</th>
              <th scope="col">interactions per tree</th>
            </tr>
          </thead>
          <tbody>
            {effortSums(rows).map((sum) => (
              <tr key={sum.annotator}>
                <th scope="row" class="words">
                  {sum.annotator}
                </th>
                <td>{sum.passes}</td>
                <td>{workWords(sum.workMs)}</td>
                <td>{sum.workPerTreeMs === null ? "no tree" : minutes(sum.workPerTreeMs)}</td>
                <td>{sum.trees}</td>
                <td>{sum.edits}</td>
                <td>{sum.undos}</td>
                <td>{sum.interactionsPerTree === null ? "no tree" : sum.interactionsPerTree.toFixed(1)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </section>
      <section class="report-scroll" aria-label="Effort of each pass" tabIndex={0}>
        <table class="report-plain">
          <caption>Each pass</caption>
          <thead>
            <tr>
              <th scope="col" class="words">
                annotator
              </th>
              <th scope="col" class="words">
                specimen
              </th>
              <th scope="col">pass</th>
              <th scope="col" class="words">
                drawn
              </th>
              <th scope="col">time at work</th>
              <th scope="col">sessions</th>
              <th scope="col">trees</th>
              <th scope="col">edits</th>
              <th scope="col">undos</th>
              <th scope="col">redos</th>
              <th scope="col">interactions per tree</th>
            </tr>
          </thead>
          <tbody>
            {rows.map((row) => (
              <PassRow key={row.cell.id} row={row} />
            ))}
          </tbody>
        </table>
      </section>
    </section>
  );
}

function PassRow({ row: { cell, specimen, returned } }: { readonly row: EffortRow }) {
  const { effort, drawn, trees } = returned;
  return (
    <tr>
      <th scope="row" class="words">
        {cell.annotator}
      </th>
      <td class="words">{specimen}</td>
      <td>{cell.training ? "training" : cell.pass}</td>
      <td class="words">{drawn === null ? "no edit" : dateWords(drawn.from).slice(0, 10)}</td>
      <td>{workWords(effort.workMs)}</td>
      <td>{effort.sessions}</td>
      <td>{trees}</td>
      <td>{effort.edits}</td>
      <td>{effort.undos}</td>
      <td>{effort.redos}</td>
      <td>{effort.interactionsPerTree === null ? "no tree" : effort.interactionsPerTree.toFixed(1)}</td>
    </tr>
  );
}

function minutes(ms: number): string {
  return ms < 600_000 ? `${(ms / 60_000).toFixed(1)}\u00a0min` : workWords(ms);
}
