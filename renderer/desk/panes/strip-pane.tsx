import { effect } from "@preact/signals";
import { useEffect, useRef } from "preact/hooks";
import { theme } from "#renderer/app/theme-choice.ts";
import { arcOfSection } from "#renderer/desk/model/place-on-strip.ts";
import type { StripSource } from "#renderer/desk/panes/section-sources.ts";
import type { StripSizes } from "#renderer/strip/strip-content.ts";
import { EMPTY_STRIP, StripView } from "#renderer/strip/strip-view.ts";

/** The selected strand laid straight, with its radius and the film of across sections. */
export function StripPane({ model }: { readonly model: StripSource }) {
  const host = useRef<HTMLDivElement>(null);
  useEffect(() => mountStrip(host.current!, model), [model]);
  return <section class="pane strip-pane" aria-label="Strip: the selected strand laid straight" ref={host} />;
}

function mountStrip(host: HTMLElement, model: StripSource): () => void {
  const { section, services, lineFacts } = model;
  let turn = 0;
  let sizes: StripSizes | null = null;
  let asked = "";

  const view = new StripView(host, {
    place: (atMm) => {
      const line = model.followed();
      const plane = section.plane.value;
      if (line === null || plane === null) return;
      section.planeName.value = "across";
      section.acrossAt(line, atMm, plane);
    },
    turn: (deg) => {
      turn = deg;
      view.show({ turn });
      void ask();
    },
    resized: (wanted) => {
      sizes = wanted;
      void ask();
    },
  });

  const ask = async () => {
    const facts = lineFacts.value;
    const wanted = sizes ?? view.sizes;
    if (facts === null || wanted.strip.height < 2) return;
    const low = section.low.value;
    const high = section.high.value;
    const key = JSON.stringify([facts.curve, turn, wanted, low, high]);
    if (key === asked) return;
    asked = key;
    const specimen = model.specimen.value.id;
    const points = facts.points.flatMap((point) => [...point]);
    const { halfWidthMm, filmHalfWidthMm } = EMPTY_STRIP;
    try {
      const [image, film] = await Promise.all([
        services.client.strip({ specimen, points, ...wanted.strip, halfWidthMm, turn, low, high }),
        services.client.film({ specimen, points, ...wanted.film, halfWidthMm: filmHalfWidthMm, low, high }),
      ]);
      if (asked !== key) return;
      view.show({ ...(image === null ? {} : { image }), ...(film === null ? {} : { film }), state: { kind: "ready" } });
    } catch (error) {
      if (asked === key) view.show({ state: { kind: "error", message: error instanceof Error ? error.message : String(error) } });
    }
  };

  const stops = [
    effect(() => {
      const facts = lineFacts.value;
      section.low.value;
      section.high.value;
      if (facts === null) {
        asked = "";
        view.show({ ...EMPTY_STRIP, hint: model.stripHint ?? EMPTY_STRIP.hint, turn });
        return;
      }
      const { points: _, curve: __, ...shown } = facts;
      view.show(shown);
      void ask();
    }),
    effect(() => {
      const plane = section.plane.value;
      const facts = lineFacts.value;
      view.show({ position: plane === null || facts === null ? null : arcOfSection(facts.points, plane.centre) });
    }),
    effect(() => {
      theme.value;
      view.themeChanged();
    }),
  ];
  return () => {
    for (const stop of stops) stop();
    view.dispose();
  };
}
