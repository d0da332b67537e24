import type { SectionModel } from "#renderer/desk/model/section-model.ts";

/** Farther, everything, closer. */
export function ScaleButtons({ section }: { readonly section: SectionModel }) {
  return (
    <fieldset class="joined">
      <legend class="unseen">Scale</legend>
      <button type="button" class="button" aria-label="Farther" title="Farther (-)" onClick={() => section.zoom(0.8)}>
        −
      </button>
      <button type="button" class="button" title="Show the whole plane (Home)" onClick={() => section.showAll()}>
        all
      </button>
      <button type="button" class="button" aria-label="Closer" title="Closer (+)" onClick={() => section.zoom(1.25)}>
        +
      </button>
    </fieldset>
  );
}
