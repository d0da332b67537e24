import { effect } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { theme } from "#renderer/app/theme-choice.ts";
import { ScaleButtons } from "#renderer/desk/panes/scale-buttons.tsx";
import { SectionBar } from "#renderer/desk/panes/section-bar.tsx";
import { mmText } from "#renderer/editor/session/words.ts";
import { SectionView } from "#renderer/section/section-view.ts";
import { awayFrom } from "#renderer/section/view-plane.ts";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import type { PointMm } from "#shared/geometry/types.ts";

/** The section with both sets on it. Nothing can be changed here; a click on a difference goes to it. */
export function PairSection({ model }: { readonly model: SideBySideModel }) {
  const host = useRef<HTMLDivElement>(null);
  useEffect(() => mountSection(host.current!, model), [model]);
  const { section } = model;
  const at = section.pointing.value?.at ?? section.plane.value?.centre;
  return (
    <section class="pane section-pane" aria-label="Section">
      <SectionBar model={model} />
      <div class="section-host" ref={host} />
      <div class="section-foot">
        <div class="readout figures" aria-live="off">
          <span>{at === undefined ? "" : `x ${at[0].toFixed(2)}  y ${at[1].toFixed(2)}  z ${at[2].toFixed(2)} mm`}</span>
        </div>
        <ScaleButtons section={section} />
      </div>
    </section>
  );
}

function mountSection(host: HTMLElement, model: SideBySideModel): () => void {
  const { section } = model;
  const point = (at: PointMm) => {
    const plane = section.plane.value!;
    section.pointing.value = {
      at,
      normal: awayFrom(plane),
      mmPerPx: plane.mmPerPx,
      slabMm: section.slabMm.value,
      under: null,
      released: true,
    };
  };
  const view = new SectionView(
    host,
    {
      hover: ({ at }) => {
        view.show({ cursor: null });
        point(at);
      },
      leave: () => {
        section.pointing.value = null;
      },
      cursor: ({ at }) => {
        view.show({ cursor: at });
        point(at);
      },
      click: ({ at }) => model.goNear(at),
      pan: (plane) => section.setPlane(plane),
      zoom: (plane) => section.setPlane(plane),
      step: (steps) => section.step(steps),
      resized: (size) => section.resized(size),
      dragMove: (hit, { at }) => {
        const ruler = section.ruler.value;
        if (hit.kind === "ruler-end" && ruler !== null) section.ruler.value = { ...ruler, [hit.end]: at };
      },
    },
    (hit) => hit.kind === "ruler-end",
  );
  section.attach(view);
  const stops = [
    effect(() => view.show({ strands: model.strands.value, places: model.places.value })),
    effect(() => view.show({ outlines: section.outlines.value, ruler: section.ruler.value })),
    effect(() => view.show({ frame: model.specimen.value.volume.frame })),
    effect(() => {
      const slab = section.slabMm.value;
      const way = section.slabMode.value === "max" ? "maximum" : "mean";
      view.show({ caption: slab === 0 ? "no slab" : `slab ${mmText(slab)}, ${way}` });
    }),
    effect(() => {
      theme.value;
      view.themeChanged();
    }),
  ];
  return () => {
    for (const stop of stops) stop();
    section.detach();
    view.dispose();
  };
}
