import { useState } from "preact/hooks";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { forgetRecovered, openRecovered } from "#renderer/desk/model/recovered-edits.ts";
import { countOf } from "#renderer/editor/session/words.ts";

/** Edits that this browser set aside because the journal had gone on without them; nothing while there are none. */
export function RecoveredList({ model, close }: { readonly model: DeskModel; readonly close: () => void }) {
  const [asked, setAsked] = useState<number | null>(null);
  const all = model.recovered.value;
  if (all.length === 0) return null;
  return (
    <section class="recovered-list" aria-label="Recovered edits">
      <h3>Recovered edits</h3>
      <p class="soft">Edits of this pass that could not follow what the library has. They are kept in this browser only.</p>
      <ul>
        {all.map(({ id, name, t, edits, isWhole }) => (
          <li key={id} class="row">
            <span>
              {name}: {countOf(edits, "edit")}, set aside {new Date(t).toLocaleString("en-GB")}
              {isWhole ? null : (
                <span class="soft"> · the edits before them are not known any more, so they cannot be opened alone</span>
              )}
            </span>
            <span class="spring" />
            {asked === id ? (
              <>
                <span class="warn">Forget them for good?</span>
                <button type="button" class="button" onClick={() => setAsked(null)}>
                  Keep them
                </button>
                <button type="button" class="button danger" onClick={() => void forgetRecovered(model, id)}>
                  Forget {countOf(edits, "edit")}
                </button>
              </>
            ) : (
              <>
                <button
                  type="button"
                  class="button"
                  disabled={!isWhole}
                  onClick={() => {
                    close();
                    void openRecovered(model, id);
                  }}
                >
                  Open as a pass of its own
                </button>
                <button type="button" class="button" onClick={() => setAsked(id)}>
                  Forget
                </button>
              </>
            )}
          </li>
        ))}
      </ul>
    </section>
  );
}
