import { useEffect, useRef, useState } from "preact/hooks";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { playBack } from "#renderer/desk/model/play-back.ts";
import { countText } from "#renderer/editor/session/words.ts";
import type { HistoryEntry } from "#shared/log/history.ts";

/** So many edits are listed at first; a pass of a week has thousands. */
const ROWS = 400;
const PLACE_WORDS = { past: "", ahead: "undone, redo brings it back", aside: "on an undone branch" } as const;

/** Every edit ever made, the newest first: click to go there. Undone branches stay. */
export function HistoryDrawer({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  editor.revision.value;
  const [most, setMost] = useState(ROWS);
  const playing = editor.playback.shown.value;
  const all = editor.keeper.entries();
  const entries = [...all].reverse().slice(0, most);
  const here = useRef<HTMLButtonElement>(null);
  const shown = playing === null ? editor.keeper.pointer : (playing.edit?.seq ?? 0);
  // While it plays the list follows; else it opens where the history stands, and moves no more.
  useEffect(() => here.current?.scrollIntoView({ block: "nearest" }), [playing === null ? 0 : shown]);
  const go = (seq: number) => editor.do({ do: "jump", seq });
  return (
    <aside class="pane history-drawer" aria-label="History">
      <header class="row">
        <h2>History</h2>
        <span class="spring" />
        <button
          type="button"
          class="button"
          title="Play back from the first edit (Shift + B)"
          disabled={playing === null && !editor.canPlayBack}
          onClick={() => playBack(model, null)}
        >
          {playing?.isRunning ? "pause" : "play back"}
        </button>
        {editor.readOnly ? null : (
          <button type="button" class="button" title="Name this point (Shift + M)" onClick={() => (model.sheet.value = "mark")}>
            mark
          </button>
        )}
        <button
          type="button"
          class="button plain"
          aria-label="Close the history"
          onClick={() => (model.historyShown.value = false)}
        >
          ✕
        </button>
      </header>
      <ol class="history-list">
        {entries.map((entry, i) => (
          <li key={entry.seq}>
            {i === 0 || dayOf(entry) !== dayOf(entries[i - 1]!) ? <p class="history-day soft">{dayOf(entry)}</p> : null}
            <div class="history-entry">
              <button
                {...(entry.seq === shown ? { ref: here } : {})}
                type="button"
                class={`history-row ${entry.place}`}
                aria-current={entry.seq === shown ? "step" : undefined}
                disabled={editor.readOnly}
                title={PLACE_WORDS[entry.place]}
                onClick={() => go(entry.seq)}
              >
                <span class="figures soft">{timeOf(entry)}</span>
                <span>
                  {entry.label}
                  {entry.marks.map((mark) => (
                    <span key={mark} class="tag">
                      {mark}
                    </span>
                  ))}
                  {entry.place === "past" ? null : <span class="unseen"> ({PLACE_WORDS[entry.place]})</span>}
                </span>
              </button>
              {entry.place === "aside" ? null : (
                <button
                  type="button"
                  class="button plain history-play"
                  title="Play back from here"
                  aria-label={`Play back from ${entry.label}, ${timeOf(entry)}`}
                  disabled={playing === null && !editor.canPlayBack}
                  onClick={() => playBack(model, entry.seq)}
                >
                  ▸
                </button>
              )}
            </div>
          </li>
        ))}
        {all.length > most ? (
          <li>
            <button type="button" class="button plain" onClick={() => setMost(most + ROWS)}>
              Show earlier edits ({countText(all.length - most)} more)
            </button>
          </li>
        ) : null}
        <li>
          <button
            type="button"
            class="history-row past"
            disabled={editor.readOnly}
            aria-current={shown === 0 ? "step" : undefined}
            onClick={() => go(0)}
          >
            <span class="figures soft" />
            <span>Before the first edit</span>
          </button>
        </li>
      </ol>
    </aside>
  );
}

function timeOf(entry: HistoryEntry): string {
  return new Date(entry.t).toLocaleTimeString("en-GB");
}

function dayOf(entry: HistoryEntry): string {
  return new Date(entry.t).toLocaleDateString("en-GB", { weekday: "short", day: "numeric", month: "long", year: "numeric" });
}
