import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SideSwatch } from "#renderer/study/side-by-side/side-swatch.tsx";

/** Which side's strand the strip shows. */
export function StripSideChoice({ model }: { readonly model: SideBySideModel }) {
  return (
    <fieldset class="joined strip-side">
      <legend class="unseen">The strip shows the strand of</legend>
      {(["a", "b"] as const).map((side) => (
        <button
          key={side}
          type="button"
          class="button"
          title={`Strand of ${model[side].label} (Shift + T)`}
          aria-pressed={model.stripSide.value === side}
          onClick={() => {
            model.stripSide.value = side;
          }}
        >
          <SideSwatch side={side} /> {side.toUpperCase()}
        </button>
      ))}
    </fieldset>
  );
}
