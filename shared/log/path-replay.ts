import type { LoggedOperation } from "#shared/log/history-tree.ts";
import { DocumentDraft, invert } from "#shared/trees/apply.ts";
import type { TreeDocument } from "#shared/trees/document.ts";

/**
 * The documents along one path of edits, to be looked at one after another. It holds a path and a document of its own: nothing
 * is written, and a history that goes on meanwhile does not reach it.
 */
export class PathReplay {
  /** Edits from the first to the newest. */
  readonly path: readonly LoggedOperation[];
  private shown: TreeDocument;
  private made: number;

  /**
   * @param path edits from the first on, each following the one before it
   * @param document after the edit `pointer`
   * @param pointer an edit of the path; 0 = before the first
   */
  constructor(path: readonly LoggedOperation[], document: TreeDocument, pointer: number) {
    this.path = path;
    this.shown = document;
    this.made = 1 + path.findIndex((step) => step.seq === pointer);
  }

  /** The document it stands at. */
  get document(): TreeDocument {
    return this.shown;
  }

  /** So many edits of the path are made in {@link document}. */
  get at(): number {
    return this.made;
  }

  /**
   * Goes to the document after so many edits of the path, kept within it. Complexity: the edits between, and one copy of each
   * table that they touch. @throws conflict when an edit does not fit, which a path of one history never does
   */
  goTo(made: number): TreeDocument {
    const to = Math.min(this.path.length, Math.max(0, made));
    const draft = new DocumentDraft(this.shown);
    for (let i = this.made; i > to; i--) draft.apply(invert(this.path[i - 1]!.operation));
    for (let i = this.made; i < to; i++) draft.apply(this.path[i]!.operation);
    this.shown = draft.finish();
    this.made = to;
    return this.shown;
  }
}
