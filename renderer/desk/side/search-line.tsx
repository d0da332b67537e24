import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { shownRegion } from "#renderer/desk/model/go-to-overlooked.ts";
import { timeLeftWords } from "#renderer/shelf/words.ts";

/** How far the scan is searched for strings, and the buttons that search it, go on, or stop. */
export function SearchLine({ model }: { readonly model: DeskModel }) {
  const { overlooked } = model;
  const job = overlooked.job.value;
  const search = overlooked.answer.value?.search;
  if (search === undefined) return <p class="soft search-line">Looking up what was searched ...</p>;
  const running = job !== null || search.job !== null;
  const share = job !== null ? job.progress : search.total === 0 ? 0 : search.done / search.total;
  const percent = Math.floor(100 * share);
  if (running) {
    const left = timeLeftWords(job?.secondsLeft ?? null);
    return (
      <div class="search-line">
        <progress max={100} value={percent} aria-label="Search of the scan" />
        <p class="soft">
          Searching the scan for strings: {percent} %{left === null ? "" : `, ${left}`}. Work goes on meanwhile.
        </p>
        <button type="button" class="button" onClick={() => void overlooked.stopSearch()}>
          Stop; what was found stays
        </button>
      </div>
    );
  }
  const isWhole = search.total > 0 && search.done >= search.total;
  return (
    <div class="search-line">
      <p class="soft">
        {isWhole
          ? "The whole scan was searched for strings."
          : search.done === 0
            ? "The scan was not searched for strings yet. The search runs in the background and can be stopped at any time."
            : `${percent} % of the scan was searched for strings.`}
      </p>
      {isWhole ? null : (
        <div class="row">
          <button type="button" class="button" onClick={() => void overlooked.search(null)}>
            {search.done === 0 ? "Search the scan" : "Go on searching"}
          </button>
          <button
            type="button"
            class="button"
            title="A box about what the section shows, 5 mm before and behind it"
            disabled={model.section.plane.value === null}
            onClick={() => void overlooked.search(shownRegion(model))}
          >
            Search here only
          </button>
        </div>
      )}
    </div>
  );
}
