import { dateWords, plural } from "#renderer/shelf/words.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";

/** One column of the grid: an annotator's how-many-th pass. */
export interface GridColumn {
  readonly annotator: string;
  readonly pass: number;
}

/** One row: a specimen with a cell for each column; null = not drawn yet. */
export interface GridRow {
  readonly specimen: StudyView["specimens"][number];
  readonly cells: readonly (AssignmentCell | null)[];
}

export interface PassGrid {
  readonly columns: readonly GridColumn[];
  readonly rows: readonly GridRow[];
}

/** Specimens by annotators and passes. @param training the grid of the training round, where everyone does each specimen once */
export function passGrid(view: StudyView, training: boolean): PassGrid {
  const passes = training ? 1 : view.passes;
  const columns = view.annotators.flatMap(({ name }) =>
    Array.from({ length: passes }, (_, k) => ({ annotator: name, pass: k + 1 })),
  );
  const keyOf = (specimen: string, annotator: string, pass: number) => JSON.stringify([specimen, annotator, pass]);
  const cells = new Map(view.assignments.map((cell) => [keyOf(cell.specimen, cell.annotator, cell.pass), cell]));
  const rows = view.specimens
    .filter((specimen) => specimen.training === training)
    .map((specimen) => ({
      specimen,
      cells: columns.map(({ annotator, pass }) => cells.get(keyOf(specimen.id, annotator, pass)) ?? null),
    }));
  return { columns, rows };
}

/** What a cell is told by: a mark, a word, and a second line. */
export interface CellWords {
  readonly kind: "undrawn" | "ready" | "waits" | "out" | "returned" | "left-out";
  /** One character, beside colour. */
  readonly mark: string;
  readonly word: string;
  /** Empty when there is nothing more to say. */
  readonly more: string;
}

export const CELL_KINDS: Readonly<Record<CellWords["kind"], { readonly mark: string; readonly meaning: string }>> = {
  undrawn: { mark: "·", meaning: "not drawn: assignments are drawn when the protocol is frozen" },
  ready: { mark: "○", meaning: "ready: its packet can be made" },
  waits: { mark: "◔", meaning: "waits: its packet cannot be made yet" },
  out: { mark: "→", meaning: "out: the annotator has it" },
  returned: { mark: "✓", meaning: "returned: taken in, and part of the analysis" },
  "left-out": { mark: "✕", meaning: "takes no part: taken in, but left out of the analysis" },
};

/** The state of one cell in words. */
export function cellWords(cell: AssignmentCell | null): CellWords {
  const words = (kind: CellWords["kind"], word: string, more = ""): CellWords => ({
    kind,
    mark: CELL_KINDS[kind].mark,
    word,
    more,
  });
  if (cell === null) return words("undrawn", "not drawn");
  if (cell.state === "returned" && cell.returned !== null) {
    const { trees, openEnds } = cell.returned;
    const counts = openEnds === 0 ? plural(trees, "tree") : `${plural(trees, "tree")}, ${openEnds} open`;
    // A training pass is no part of the analysis, and nothing is wrong with that.
    const leftOut = cell.counts !== null && !cell.counts.yes && !cell.training;
    return leftOut ? words("left-out", "takes no part", counts) : words("returned", "returned", counts);
  }
  if (cell.state === "out" && cell.out !== null) return words("out", "out", `since ${dateWords(cell.out.at).slice(0, 10)}`);
  if (cell.why === null) return words("ready", "ready");
  return words("waits", "waits", cell.waivable && cell.earliest !== null ? `until ${dateWords(cell.earliest).slice(0, 10)}` : "");
}

/** What the lead does next, in one sentence. */
export function nextStep(view: StudyView): string {
  const { protocol, assignments } = view;
  if (!protocol.frozen) {
    return protocol.version === 1
      ? "Next: fill in the protocol and freeze it. Assignments are drawn then."
      : `Next: freeze version ${protocol.version} of the protocol, so that packets carry it.`;
  }
  const open = assignments.filter((cell) => cell.state !== "returned");
  if (open.length === 0) return "Every pass is back. The report holds all of them.";
  if (open.some((cell) => cell.state === "planned" && cell.why === null))
    return "Next: make packets of what is ready, and give them to the annotators.";
  if (open.some((cell) => cell.state === "out")) return "Next: take in the packets that come back.";
  return "Nothing can go out at the moment: a cell that waits says why.";
}

/** How many passes that count have come back: "4 of 18 passes are back". */
export function progressOf(view: StudyView): { readonly back: number; readonly planned: number } {
  const counted = view.specimens.filter(({ training }) => !training).length;
  return {
    planned: counted * view.annotators.length * view.passes,
    back: view.assignments.filter(({ training, state }) => !training && state === "returned").length,
  };
}
