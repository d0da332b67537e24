import "#renderer/space/space.css";
import { effect } from "@preact/signals";
import { useEffect, useRef, useState } from "preact/hooks";
import { theme } from "#renderer/app/theme-choice.ts";
import { SpaceView } from "#renderer/space/space-view.ts";
import { spreadBounds, spreadLimits, spreadStrands } from "#renderer/study/report/spread-scene.ts";
import type { SpreadStrand } from "#shared/agreement/report/report-data.ts";

/** Where in space annotators differ on one specimen, to be turned by hand or by the arrow keys. */
export function SpreadSpace({ spread }: { readonly spread: readonly SpreadStrand[] }) {
  const names = [...new Set(spread.map(({ specimen }) => specimen))];
  const [chosen, setChosen] = useState(names[0]!);
  const host = useRef<HTMLDivElement>(null);
  const view = useRef<SpaceView | null>(null);
  const limits = spreadLimits(spread);
  useEffect(() => {
    const made = new SpaceView(host.current!);
    view.current = made;
    const stop = effect(() => {
      theme.value;
      made.themeChanged();
    });
    return () => {
      stop();
      view.current = null;
      made.dispose();
    };
  }, []);
  useEffect(() => {
    const own = spread.filter(({ specimen }) => specimen === chosen);
    view.current?.show({ bounds: spreadBounds(own), strands: spreadStrands(own, limits) });
    view.current?.showAll();
  }, [spread, chosen]);
  return (
    <figure class="spread-figure">
      <div class="row">
        <label class="row">
          <span>Specimen</span>
          <select class="field" value={chosen} onChange={(event) => setChosen(event.currentTarget.value)}>
            {names.map((name) => (
              <option key={name} value={name}>
                {name}
              </option>
            ))}
          </select>
        </label>
        <button type="button" class="button" onClick={() => view.current?.showAll()}>
          all
        </button>
      </div>
      <div class="spread-host" ref={host} />
      <figcaption class="soft">
        Grey and thin: within {limits.apart.toFixed(2)} mm of each other. Coloured: farther apart. Broad: {limits.far.toFixed(2)}{" "}
        mm and more, the tenth of all places that differ most. Dashed in another colour: not drawn by every annotator.
      </figcaption>
    </figure>
  );
}
