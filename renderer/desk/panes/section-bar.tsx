import { Contrast } from "#renderer/desk/panes/contrast.tsx";
import type { SectionSource } from "#renderer/desk/panes/section-sources.ts";
import { nextSlab, SLABS_MM } from "#renderer/editor/commands/view-commands.ts";
import { mmText } from "#renderer/editor/session/words.ts";
import type { PlaneName } from "#renderer/editor/view-control.ts";

const PLANES: readonly (readonly [PlaneName, string])[] = [
  ["flat", "flat (1)"],
  ["front", "front (2)"],
  ["side", "side (3)"],
  ["across", "across the string (4)"],
  ["along", "along the string (5)"],
];

/** What the section shows: which plane, how thick, which greys. */
export function SectionBar({ model }: { readonly model: SectionSource }) {
  const { section } = model;
  const slab = section.slabMm.value;
  return (
    <div class="section-bar" role="toolbar" aria-label="Section view">
      <fieldset class="joined">
        <legend class="unseen">Plane</legend>
        {PLANES.map(([name, title]) => (
          <button
            key={name}
            type="button"
            class="button"
            aria-pressed={section.planeName.value === name}
            title={title}
            onClick={() => section.showPlane(name)}
          >
            {name}
          </button>
        ))}
      </fieldset>
      <fieldset class="joined">
        <legend class="unseen">Slab</legend>
        <button
          type="button"
          class="button"
          aria-label="Thinner slab"
          title="Thinner slab ([)"
          disabled={slab <= 0}
          onClick={() => section.setSlab(nextSlab(slab, -1))}
        >
          −
        </button>
        <output class="slab-size figures" title="Thickness of the slab">
          {slab === 0 ? "no slab" : mmText(slab)}
        </output>
        <button
          type="button"
          class="button"
          aria-label="Thicker slab"
          title="Thicker slab (])"
          disabled={slab >= SLABS_MM.at(-1)!}
          onClick={() => section.setSlab(nextSlab(slab, 1))}
        >
          +
        </button>
        <button
          type="button"
          class="button"
          title="Slab shows the maximum, or the mean (\)"
          onClick={() => section.setSlabMode(section.slabMode.value === "max" ? "mean" : "max")}
        >
          {section.slabMode.value === "max" ? "max" : "mean"}
        </button>
      </fieldset>
      <Contrast model={model} />
    </div>
  );
}
