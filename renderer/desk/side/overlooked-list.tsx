import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { goToStretch, proposeStretch } from "#renderer/desk/model/go-to-overlooked.ts";
import { SearchLine } from "#renderer/desk/side/search-line.tsx";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import { mmText } from "#renderer/editor/session/words.ts";

/** Stretches of string that no strand explains, longest first: go there, propose a string, or dismiss with a reason. */
export function OverlookedList({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const { overlooked, editor } = model;
  const shown = overlooked.shown.value;
  const search = overlooked.answer.value?.search;
  return (
    <>
      <SearchLine model={model} />
      {shown.length === 0 && search !== undefined && search.done > 0 ? (
        <p class="empty">
          {search.done < search.total
            ? "Nothing overlooked in what was searched so far."
            : "Nothing overlooked: every stretch of string that the search found lies on a strand."}
        </p>
      ) : null}
      <ul class="finding-list">
        {shown.map((stretch) => {
          const current = overlooked.at.value === stretch.key;
          return (
            <li key={stretch.key} class={stretch.dismissedBy === null ? "" : "dismissed"}>
              <button type="button" class="finding-row" aria-pressed={current} onClick={() => goToStretch(model, stretch)}>
                <span class="figures">{mmText(stretch.lengthMm)}</span>
                <span>
                  {`radius about ${mmText(stretch.radiusMm, 2)}`}
                  {stretch.reason === null ? null : <em class="soft"> Dismissed: {stretch.reason}</em>}
                </span>
              </button>
              {current && !editor.readOnly ? (
                <div class="row finding-actions">
                  {stretch.dismissedBy === null ? (
                    <>
                      <button type="button" class="button" onClick={() => proposeStretch(model, stretch)}>
                        propose the string
                      </button>
                      <button type="button" class="button" onClick={() => context.screen.dismissFinding()}>
                        dismiss with a reason
                      </button>
                    </>
                  ) : (
                    <button
                      type="button"
                      class="button"
                      onClick={() => editor.do({ do: "dismiss", args: { key: stretch.dismissedBy!, reason: null } })}
                    >
                      bring it back
                    </button>
                  )}
                </div>
              ) : null}
            </li>
          );
        })}
      </ul>
    </>
  );
}
