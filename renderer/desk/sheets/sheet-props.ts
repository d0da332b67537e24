import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** What every sheet of the desk is given. */
export interface DeskSheetProps {
  readonly model: DeskModel;
  readonly context: DeskContext;
  readonly close: () => void;
}
