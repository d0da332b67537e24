import { effect } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { theme } from "#renderer/app/theme-choice.ts";
import { scanBounds } from "#renderer/space/scan-bounds.ts";
import { SpaceView } from "#renderer/space/space-view.ts";
import { LOOK_ACROSS_MM, type SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";

/** Without a GPU a picture in space costs more than one of the section: the plane follows when it rests this long. */
const REST_MS = 180;

/** Both sets in one space: what both have quiet, what one alone has loud, every difference with its glyph. */
export function PairSpace({ model }: { readonly model: SideBySideModel }) {
  const host = useRef<HTMLDivElement>(null);
  const view = useRef<SpaceView | null>(null);
  useEffect(() => {
    const mounted = mountSpace(host.current!, model);
    view.current = mounted.view;
    return () => {
      view.current = null;
      mounted.stop();
    };
  }, [model]);
  return (
    <section class="pane space-pane" aria-label="Space">
      <div class="space-host" ref={host} />
      <div class="space-tools">
        <button type="button" class="button" title="Everything, upright, from the front" onClick={() => view.current?.showAll()}>
          all
        </button>
        <button type="button" class="button" title="Look as the section looks" onClick={() => view.current?.lookAlongSection()}>
          as section
        </button>
      </div>
    </section>
  );
}

function mountSpace(host: HTMLElement, model: SideBySideModel): { view: SpaceView; stop: () => void } {
  const { section } = model;
  const view = new SpaceView(host, {
    click: (hit) => {
      if (hit !== null && !model.goNear(hit.point)) section.goTo(hit.point);
    },
  });
  view.show({ bounds: scanBounds(model.specimen.value.volume) });
  let rest: ReturnType<typeof setTimeout> | undefined;
  const stops = [
    effect(() => view.show({ strands: model.strands.value, places: model.places.value })),
    effect(() => view.show({ valve: valveAxes(model.specimen.value.landmarks) })),
    effect(() => {
      const at = model.lookedAt.value;
      if (at !== null) view.turnTo(at, LOOK_ACROSS_MM);
    }),
    effect(() => {
      const plane = section.plane.value;
      const size = section.paneSize.value;
      if (plane === null) return;
      const { centre, right, down, mmPerPx } = plane;
      const shown = { centre, right, down, widthMm: size.width * mmPerPx, heightMm: size.height * mmPerPx };
      clearTimeout(rest);
      rest = setTimeout(() => view.show({ plane: shown }), REST_MS);
    }),
    effect(() => {
      theme.value;
      view.themeChanged();
    }),
  ];
  return {
    view,
    stop: () => {
      clearTimeout(rest);
      for (const stop of stops) stop();
      view.dispose();
    },
  };
}
