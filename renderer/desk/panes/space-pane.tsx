import { effect } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { theme } from "#renderer/app/theme-choice.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { suggestedLines } from "#renderer/desk/model/suggested-lines.ts";
import { SpaceView } from "#renderer/space/space-view.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { valveAxes } from "#shared/geometry/valve-axes.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { indexToMm } from "#shared/volume/grid.ts";

/**
 * Space follows the section's plane and the guide when they rest this long: without a GPU a picture in space costs more than
 * one of the section, and the section is where the eyes are.
 */
const REST_MS = 180;

/** At most so many bright surface points; enough to see the valve, few enough for a laptop without a GPU. */
const SURFACE_POINTS = 20_000;

/** The trees in space, with the section's plane. */
export function SpacePane({ model }: { readonly model: DeskModel }) {
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

function mountSpace(host: HTMLElement, model: DeskModel): { view: SpaceView; stop: () => void } {
  const { editor, section, services } = model;
  const { volume } = model.specimen.value;
  const far = indexToMm(volume, [volume.size[0] - 1, volume.size[1] - 1, volume.size[2] - 1]);
  const near = indexToMm(volume, [0, 0, 0]);
  const centre = pointMm((near[0] + far[0]) / 2, (near[1] + far[1]) / 2, (near[2] + far[2]) / 2);
  const view = new SpaceView(host, {
    click: (hit) => {
      if (hit === null) return;
      if (hit.kind === "node") editor.select({ kind: "node", id: hit.id });
      else if (hit.kind === "strand") editor.select({ kind: "strand", id: hit.id, point: hit.point });
      section.goTo(hit.point);
      if (hit.kind === "surface") void editor.proposeNear(hit.point);
    },
  });
  view.show({ bounds: { centre, radiusMm: distance(near, far) / 2 } });
  services.client
    .surface({ specimen: model.specimen.value.id, limit: SURFACE_POINTS, polarity: model.specimen.value.polarity })
    .then((frame) => {
      if (frame !== null) view.show({ surface: floatsOf(frame.body) });
    })
    .catch((error: unknown) => services.notices.failed(error));
  const plane = new Resting(REST_MS);
  const guided = new Resting(REST_MS);
  const stops = [
    () => plane.stop(),
    () => guided.stop(),
    effect(() => view.show({ document: editor.document.value, selection: editor.selection.value })),
    effect(() => view.show({ valve: valveAxes(model.specimen.value.landmarks) })),
    effect(() => view.show({ pins: editor.projection.value.pins })),
    effect(() => view.show({ proposal: suggestedLines(model) })),
    effect(() => {
      const guide = editor.guide.value;
      guided.do(() => view.show({ guide: guide === null ? null : guide.points.flatMap((point) => [...point]) }));
    }),
    effect(() => {
      const shown = section.plane.value;
      const { width, height } = section.paneSize.value;
      if (shown === null) return;
      const { centre, right, down, mmPerPx } = shown;
      plane.do(() => view.show({ plane: { centre, right, down, widthMm: width * mmPerPx, heightMm: height * mmPerPx } }));
    }),
    effect(() => {
      theme.value;
      view.themeChanged();
    }),
  ];
  return {
    view,
    stop: () => {
      for (const stop of stops) stop();
      view.dispose();
    },
  };
}

/** Does the newest of several actions once no other came for a while. */
class Resting {
  private timer: ReturnType<typeof setTimeout> | null = null;

  constructor(private readonly restMs: number) {}

  do(action: () => void): void {
    this.stop();
    this.timer = setTimeout(action, this.restMs);
  }

  stop(): void {
    if (this.timer !== null) clearTimeout(this.timer);
  }
}

/** Little-endian float32 out of a frame's body, which need not be aligned. */
function floatsOf(body: Uint8Array): Float32Array {
  return new Float32Array(body.slice().buffer);
}
