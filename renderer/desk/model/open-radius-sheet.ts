import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { type PlaceOnStrand, placeOnStrip } from "#renderer/desk/model/place-on-strip.ts";
import { selectLine } from "#renderer/editor/selection.ts";

/** Opens the sheet that sets a radius: at a place pointed at, else at the place chosen on the strip; the strip shows its strand. */
export function openRadiusSheet(model: DeskModel, at: PlaceOnStrand | null): void {
  const { editor, section } = model;
  const document = editor.document.value;
  if (at !== null) editor.selection.value = selectLine(document, at.strand);
  model.radiusPlace.value = at ?? placeOnStrip(document, editor.selection.value, section.plane.value?.centre ?? null);
  model.sheet.value = "radius";
}
