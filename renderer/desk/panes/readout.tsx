import { useSignal } from "@preact/signals";
import { useEffect } from "preact/hooks";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { ScaleButtons } from "#renderer/desk/panes/scale-buttons.tsx";
import { mmText } from "#renderer/editor/session/words.ts";
import { distance } from "#shared/geometry/vec3.ts";

/** Place and grey value under the pointer, the depth it snaps to, the guide's image fit, the ruler. */
export function Readout({ model }: { readonly model: DeskModel }) {
  const { section, editor, services } = model;
  const grey = useSignal<number | null>(null);
  const pointing = section.pointing.value;
  const snapped = editor.snapped.value;
  const at = pointing?.at;
  useEffect(() => {
    if (at === undefined) {
      grey.value = null;
      return;
    }
    services.client
      .value(model.specimen.value.id, at)
      .then((answer) => {
        if (answer !== null) grey.value = answer.value;
      })
      // The readout is a convenience; what is wrong with the server is said by the picture.
      .catch(() => undefined);
  }, [at, grey, model, services]);

  const ruler = section.ruler.value;
  const guide = editor.guide.value;
  return (
    <div class="section-foot">
      <div class="readout figures" aria-live="off">
        <span>{at === undefined ? "" : `x ${at[0].toFixed(2)}  y ${at[1].toFixed(2)}  z ${at[2].toFixed(2)} mm`}</span>
        <span>{at === undefined ? "" : `value ${grey.value === null ? "outside" : Math.round(grey.value * 1000) / 1000}`}</span>
        {snapped !== null && snapped.candidates > 0 ? (
          <span>
            depth {snapped.depthMm >= 0 ? "+" : "−"}
            {Math.abs(snapped.depthMm).toFixed(2)} mm
            {snapped.candidates > 1 ? ` (${snapped.candidate + 1} of ${snapped.candidates})` : ""}
          </span>
        ) : null}
        {guide === null || guide.imageFit === null ? null : (
          <span class={guide.doubtful.length > 0 ? "warn" : ""}>
            fit {guide.imageFit.toFixed(2)}
            {guide.coarse ? " (coarse)" : guide.doubtful.length > 0 ? " leaves the string" : ""}
          </span>
        )}
        {ruler === null ? null : <span class="ruler-length">ruler {mmText(distance(ruler.from, ruler.to), 2)}</span>}
      </div>
      <button
        type="button"
        class="button"
        aria-pressed={section.rulerShown.value}
        title="Ruler (Shift + R)"
        onClick={() => section.toggleRuler()}
      >
        ruler
      </button>
      <ScaleButtons section={section} />
    </div>
  );
}
