import type { AssignmentCell, StudyView } from "#shared/api/study.ts";

/**
 * Whether an assignment's packet could be made together with the chosen ones: the protocol is frozen, its scan is there, the
 * annotator's pass before over the specimen is back, and everything before it in the annotator's order is out or chosen.
 */
export function canGoWith(view: StudyView, cell: AssignmentCell, chosen: ReadonlySet<string>): boolean {
  if (view.protocol.frozen === null || cell.state === "returned") return false;
  const specimen = view.specimens.find(({ id }) => id === cell.specimen);
  if (specimen === undefined || specimen.problem !== null) return false;
  const own = view.assignments.filter(({ annotator }) => annotator === cell.annotator);
  const before = own.find((one) => one.specimen === cell.specimen && one.pass === cell.pass - 1);
  if (before !== undefined && before.state !== "returned") return false;
  return own.every((one) => one.place >= cell.place || one.state !== "planned" || chosen.has(one.id));
}

/** The chosen ones that can go; one that is taken out takes those after it along. */
export function keptChoice(view: StudyView, chosen: ReadonlySet<string>): ReadonlySet<string> {
  const kept = new Set(chosen);
  for (;;) {
    const stuck = view.assignments.filter((cell) => kept.has(cell.id) && !canGoWith(view, cell, kept));
    if (stuck.length === 0) return kept;
    for (const { id } of stuck) kept.delete(id);
  }
}
