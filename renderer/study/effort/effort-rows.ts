import type { AssignmentCell, StudyView } from "#shared/api/study.ts";
import type { ReturnedPass } from "#shared/study/study-record.ts";

/** A pass that came back, with what went into it. */
export interface EffortRow {
  readonly cell: AssignmentCell;
  readonly specimen: string;
  readonly returned: ReturnedPass;
}

/** Sums of one annotator over the passes that came back. */
export interface EffortSum {
  readonly annotator: string;
  readonly passes: number;
  readonly workMs: number;
  readonly edits: number;
  readonly undos: number;
  readonly trees: number;
  /** Time at work over trees of the passes, milliseconds; null without a tree. */
  readonly workPerTreeMs: number | null;
  readonly interactionsPerTree: number | null;
}

/** Passes that came back, in the order annotator, specimen, pass. */
export function effortRows(view: StudyView): EffortRow[] {
  const names = view.specimens.map(({ id }) => id);
  const annotators = view.annotators.map(({ name }) => name);
  return view.assignments
    .flatMap((cell) => {
      const specimen = view.specimens.find(({ id }) => id === cell.specimen)?.name ?? cell.specimen;
      return cell.returned === null ? [] : [{ cell, specimen, returned: cell.returned }];
    })
    .sort(
      (a, b) =>
        annotators.indexOf(a.cell.annotator) - annotators.indexOf(b.cell.annotator) ||
        names.indexOf(a.cell.specimen) - names.indexOf(b.cell.specimen) ||
        a.cell.pass - b.cell.pass,
    );
}

/** Sums for each annotator who has a pass back. Interactions are edits, undos and redos. */
export function effortSums(rows: readonly EffortRow[]): EffortSum[] {
  const annotators = [...new Set(rows.map(({ cell }) => cell.annotator))];
  return annotators.map((annotator) => {
    const own = rows.filter(({ cell }) => cell.annotator === annotator).map(({ returned }) => returned);
    const sum = (of: (pass: ReturnedPass) => number) => own.reduce((total, pass) => total + of(pass), 0);
    const touched = sum(({ effort }) => effort.trees.length);
    const trees = sum((pass) => pass.trees);
    const workMs = sum(({ effort }) => effort.workMs);
    return {
      annotator,
      passes: own.length,
      workMs,
      edits: sum(({ effort }) => effort.edits),
      undos: sum(({ effort }) => effort.undos),
      trees,
      workPerTreeMs: trees === 0 ? null : workMs / trees,
      interactionsPerTree:
        touched === 0 ? null : sum(({ effort }) => effort.trees.reduce((all, tree) => all + tree.interactions, 0)) / touched,
    };
  });
}
