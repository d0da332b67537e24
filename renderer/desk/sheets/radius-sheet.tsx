import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { PlaceOnStrand } from "#renderer/desk/model/place-on-strip.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { mmText, treeName } from "#renderer/editor/session/words.ts";
import { stretchAbout } from "#renderer/editor/tracing/stretch-about.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { Strand, TreeDocument } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** Length of the stretch that is offered first, millimetres. */
const FIRST_LENGTH_MM = 0.5;

/** A radius set by hand, about the place chosen on the strip or pointed at on the section. */
export function RadiusSheet(props: DeskSheetProps) {
  const { model, close } = props;
  const place = model.radiusPlace.value;
  const document = model.editor.document.value;
  const strand = place === null ? undefined : document.strands.get(place.strand);
  if (place === null || strand === undefined || strand.curve === null) {
    return (
      <Sheet title="Set a radius" close={close} kind="small-sheet">
        <p>
          {strand === undefined
            ? "Choose the place first: select a strand and click on the strip, or point at the strand on the section."
            : "This strand is not traced yet, so it has no radius to set. Trace it first."}
        </p>
      </Sheet>
    );
  }
  return <RadiusForm {...props} place={place} strand={strand} />;
}

function RadiusForm({ model, close, place, strand }: DeskSheetProps & { place: PlaceOnStrand; strand: Strand }) {
  const { editor } = model;
  const document = editor.document.value;
  const [lengthMm, setLength] = useState(FIRST_LENGTH_MM);
  const now = radiiAbout(document, strand, place, Number.isFinite(lengthMm) ? lengthMm : 0);
  const [radiusMm, setRadius] = useState(now.middle ?? Number.NaN);
  const [isBelow, setBelow] = useState(false);
  const isRight = lengthMm >= 0 && (isBelow || radiusMm > 0);
  const { at } = nearestOnPolyline(polylineOf(document, strand), place.near);
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="submit" form="radius-form" class="button main" disabled={!isRight}>
        Set the radius
      </button>
    </>
  );
  return (
    <Sheet title="Set a radius" close={close} foot={foot} kind="small-sheet">
      <form
        id="radius-form"
        class="radius-form"
        onSubmit={(event) => {
          event.preventDefault();
          if (!isRight) return;
          close();
          editor.do({ do: "radius", ...place, lengthMm, radiusMm: isBelow ? null : radiusMm });
        }}
      >
        <p>
          {treeName(document, strand.tree)} {strand.id}, {mmText(at, 2)} from its lower end. {now.words}
        </p>
        <label class="stacked">
          <span>Radius, mm</span>
          <input
            class="field"
            type="number"
            min="0"
            step="any"
            disabled={isBelow}
            value={Number.isFinite(radiusMm) ? radiusMm : ""}
            onInput={(event) => setRadius(event.currentTarget.valueAsNumber)}
          />
        </label>
        <label class="check">
          <input type="checkbox" checked={isBelow} onChange={(event) => setBelow(event.currentTarget.checked)} />
          <span>Below resolution: no radius here</span>
        </label>
        <label class="stacked">
          <span>Over a stretch of, mm (half to either side; 0 = the nearest point alone)</span>
          <input
            class="field"
            type="number"
            min="0"
            step="any"
            value={Number.isFinite(lengthMm) ? lengthMm : ""}
            onInput={(event) => setLength(event.currentTarget.valueAsNumber)}
          />
        </label>
        <p class="soft">
          The stretch is marked as edited. Tracing the strand anew (a pin moved, a branch) measures its radius again.
        </p>
      </form>
    </Sheet>
  );
}

/** What the stretch's radius is now: in the middle of it, and in words. */
function radiiAbout(
  document: TreeDocument,
  strand: Strand,
  place: PlaceOnStrand,
  lengthMm: number,
): { readonly middle: number | null; readonly words: string } {
  const curve = document.curves.get(strand.curve!);
  const points = polylineOf(document, strand);
  const [first, last] = stretchAbout(points, place.near, lengthMm);
  const [middleAt] = stretchAbout(points, place.near, 0);
  const known = [...(curve?.radii.subarray(first, last + 1) ?? [])].filter((radius) => !Number.isNaN(radius));
  const middle = curve?.radii[middleAt];
  const count = `${last - first + 1} of its points`;
  if (known.length === 0) return { middle: null, words: `Now below resolution at ${count}.` };
  const [low, high] = [Math.min(...known), Math.max(...known)];
  const range = high - low < 0.005 ? mmText(low, 2) : `${low.toFixed(2)} to ${mmText(high, 2)}`;
  return {
    middle: middle === undefined || Number.isNaN(middle) ? null : Number(middle.toFixed(3)),
    words: `Now ${range} at ${count}.`,
  };
}
