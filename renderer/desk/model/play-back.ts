import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { likesStillness } from "#renderer/desk/model/reduced-motion.ts";

/** Plays the history back from an edit on (null = the first); while it is played already and no edit is named, goes on or rests. */
export function playBack({ editor }: Pick<DeskModel, "editor">, seq: number | null): void {
  if (seq === null && editor.playback.shown.value !== null) editor.playback.toggle();
  else editor.playBack(seq, !likesStillness());
}
