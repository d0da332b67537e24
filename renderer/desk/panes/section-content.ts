import { effect } from "@preact/signals";
import { theme } from "#renderer/app/theme-choice.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { suggestedLines } from "#renderer/desk/model/suggested-lines.ts";
import { mmText } from "#renderer/editor/session/words.ts";
import type { Pointing, Under } from "#renderer/editor/view-control.ts";
import type { SectionEvents, SectionHit, SectionPlace, StrandUnderWay } from "#renderer/section/section-content.ts";
import { SectionView } from "#renderer/section/section-view.ts";
import { awayFrom } from "#renderer/section/view-plane.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";

/** Puts a section pane into `host` and joins it to the model; the returned function takes it out again. */
export function mountSection(host: HTMLElement, model: DeskModel): () => void {
  const { editor, section } = model;
  let dragged: { readonly hit: SectionHit; readonly to: PointMm } | null = null;

  const pointingOf = (place: SectionPlace): Pointing => {
    const plane = section.plane.value!;
    return {
      at: place.at,
      normal: awayFrom(plane),
      mmPerPx: plane.mmPerPx,
      slabMm: section.slabMm.value,
      under: underOf(place.hit),
      released: place.modifiers.alt,
    };
  };
  const hover = (place: SectionPlace) => {
    const pointing = pointingOf(place);
    section.pointing.value = pointing;
    void editor.point(pointing);
  };
  const events: SectionEvents = {
    hover: (place) => {
      view.show({ cursor: null });
      hover(place);
    },
    leave: () => {
      section.pointing.value = null;
      void editor.point(null);
    },
    click: (place) => {
      const pointing = pointingOf(place);
      section.pointing.value = pointing;
      editor.click(pointing);
      void editor.point(pointing);
    },
    cursor: (place) => {
      view.show({ cursor: place.at });
      hover(place);
    },
    pan: (plane) => section.setPlane(plane),
    zoom: (plane) => section.setPlane(plane),
    step: (steps) => section.step(steps),
    resized: (size) => section.resized(size),
    dragStart: (hit, place) => {
      dragged = { hit, to: place.at };
    },
    dragMove: (hit, place) => {
      dragged = { hit, to: place.at };
      if (hit.kind === "ruler-end") moveRuler(model, hit.end, place.at);
      else view.show({ snap: { point: place.at, depthMm: 0, strength: 0 } });
    },
    dragEnd: (_, place, cancelled) => {
      const last = dragged;
      dragged = null;
      if (last === null || cancelled) return;
      dropAt(model, last.hit, place);
    },
  };
  const view = new SectionView(host, events, (hit) => hit.kind === "ruler-end" || (hit.kind !== "strand" && !editor.readOnly));
  section.attach(view);

  const stops = [
    effect(() => {
      view.show({ document: editor.document.value });
      const pointing = section.pointing.peek();
      // What lay under the pointer may be another thing now; the next movement sees it, the keyboard cursor looks again.
      if (pointing !== null) section.pointing.value = { ...pointing, under: underOf(view.cursorPlace()?.hit ?? null) };
    }),
    effect(() => view.show({ selection: editor.selection.value })),
    effect(() => view.show({ outlines: section.outlines.value, ruler: section.ruler.value })),
    effect(() => view.show({ frame: model.specimen.value.volume.frame })),
    effect(() => {
      const guide = editor.guide.value;
      view.show({ guide: guide === null ? null : { ...guide, points: guide.points.flatMap((point) => [...point]) } });
    }),
    effect(() => view.show({ underWay: underWayOf(model) })),
    effect(() => view.show({ places: placesOf(model) })),
    effect(() => view.show({ proposal: suggestedLines(model) })),
    effect(() => {
      const snapped = editor.snapped.value;
      const shown = snapped !== null && snapped.candidates > 0;
      view.show({ snap: shown ? { point: snapped.point, depthMm: snapped.depthMm, strength: 1 } : null });
    }),
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

function underOf(hit: SectionHit | null): Under | null {
  if (hit === null || hit.kind === "under-way-pin" || hit.kind === "ruler-end") return null;
  if (hit.kind === "strand") return { kind: "strand", id: hit.id, point: hit.point };
  return hit;
}

/** Pins that wait to be carried out, and straight lines to them; what is in the document is drawn from there. */
function underWayOf({ editor }: DeskModel): StrandUnderWay | null {
  const { pins, settled, kind } = editor.projection.value;
  if (kind === "nothing" || pins.length === 0) return null;
  const waiting = pins.slice(Math.max(0, settled - 1));
  const curves = waiting.slice(1).map((pin, i) => [...waiting[i]!, ...pin]);
  return { tree: null, pins, curves };
}

/** The fork that the guide suggests, marked at its place. */
function placesOf({ editor }: DeskModel): MarkedPlace[] {
  const fork = editor.proposedFork();
  return fork === null ? [] : [{ at: fork.at, glyph: NODE_GLYPHS.fork, colour: null, picked: true }];
}

function moveRuler({ section }: DeskModel, end: "from" | "to", at: PointMm): void {
  const ruler = section.ruler.value;
  if (ruler !== null) section.ruler.value = end === "from" ? { ...ruler, from: at } : { ...ruler, to: at };
}

function dropAt({ editor, section }: DeskModel, hit: SectionHit, place: SectionPlace): void {
  const plane = section.plane.value;
  if (plane === null || hit.kind === "ruler-end" || hit.kind === "strand") return;
  const pointing: Pointing = {
    at: place.at,
    normal: awayFrom(plane),
    mmPerPx: plane.mmPerPx,
    slabMm: section.slabMm.value,
    under: null,
    released: place.modifiers.alt,
  };
  if (hit.kind === "node") editor.carried.value = { kind: "node", id: hit.id };
  else if (hit.kind === "pin") editor.carried.value = { kind: "pin", line: hit.strand, index: hit.index };
  else editor.carryPinUnderWay(hit.index);
  editor.click(pointing);
}
