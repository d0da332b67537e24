import type { Editor } from "#renderer/editor/editor.ts";
import type { ViewControl } from "#renderer/editor/view-control.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { StrandId } from "#shared/trees/document.ts";

/** What of the screen commands may open or change. */
export interface ScreenControl {
  readonly openPalette: () => void;
  readonly openKeyHelp: () => void;
  readonly openMenu: () => void;
  readonly toggleHistory: () => void;
  readonly openExport: () => void;
  readonly openTakeIn: () => void;
  readonly openAbout: () => void;
  readonly openUpright: () => void;
  readonly toggleTheme: () => void;
  readonly backToShelf: () => void;
  /** Finished, or under way again. */
  readonly finishPass: () => void;
  /** Opens the sheet for a radius at this place; null = at the place chosen on the strip. */
  readonly setRadius: (at: { readonly strand: StrandId; readonly near: PointMm } | null) => void;
  /** Plays the history back, from the beginning; goes on or rests while it is played. */
  readonly playBack: () => void;
  /** The pass is an assignment of a study. */
  readonly isAssignment: () => boolean;
  /** The rules that an assignment is drawn by. */
  readonly openRules: () => void;
  readonly handBack: () => void;
  readonly nameMark: () => void;
  readonly renameTree: () => void;
  /** The next (+1) or previous (-1) finding. */
  readonly stepFinding: (by: 1 | -1) => void;
  readonly dismissFinding: () => void;
  /** Moves keyboard focus to the section. */
  readonly focusSection: () => void;
}

/** What commands act on. */
export interface DeskContext {
  readonly editor: Editor;
  readonly view: ViewControl;
  readonly screen: ScreenControl;
}
