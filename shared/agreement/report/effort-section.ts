import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";

/** What the passes cost, from their logs. */
export function effortSection({ context }: ReportInput): ReportSection {
  const title = "Effort";
  const { effort, idleSeconds } = context;
  if (effort === null || effort.length === 0) {
    const why =
      "Tree files hold no log of the work: time at work, edits and undos are known only for passes that were made or taken in with their logs.";
    return { id: "effort", title, blocks: [text(why, "refusal")] };
  }
  const table = new TableOf("Work of each pass, from its log", [
    { name: "specimen", words: true },
    { name: "annotator", words: true },
    "pass",
    "time at work (min)",
    "edits",
    "undos",
    "edits a tree",
    "minutes a tree",
  ]);
  for (const { specimen, annotator, pass, secondsAtWork, edits, undos, trees } of effort) {
    const minutes = secondsAtWork === null ? null : secondsAtWork / 60;
    const [noTime, noTree] = ["The log holds no times of work.", "The pass has no tree."];
    table.row(
      specimen,
      annotator,
      String(pass),
      table.number(minutes, 1, noTime),
      String(edits),
      String(undos),
      table.number(trees > 0 ? edits / trees : null, 1, noTree),
      table.number(trees > 0 && minutes !== null ? minutes / trees : null, 1, minutes === null ? noTime : noTree),
    );
  }
  if (idleSeconds !== null) table.note(`A pause longer than ${fixed(idleSeconds, 0)} seconds does not count as time at work.`);
  return { id: "effort", title, blocks: [table.table] };
}
