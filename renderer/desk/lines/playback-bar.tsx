import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { likesStillness } from "#renderer/desk/model/reduced-motion.ts";
import { PACES, type Pace } from "#renderer/editor/session/playback.ts";
import { countText } from "#renderer/editor/session/words.ts";

/** Over the panes while the history is played back: where it stands, and what moves and ends it. */
export function PlaybackBar({ model }: { readonly model: DeskModel }) {
  const { editor } = model;
  const { playback } = editor;
  const played = playback.shown.value;
  if (played === null) return null;
  const { at, count, edit, isRunning } = played;
  return (
    <section class="banner playback-bar" aria-label="Play back">
      <button type="button" class="button" title="One edit back (<)" disabled={at === 0} onClick={() => playback.step(-1)}>
        back
      </button>
      <button
        type="button"
        class="button main playback-go"
        title={isRunning ? "Pause (Shift + B)" : "Go on (Shift + B)"}
        onClick={() => playback.toggle()}
      >
        {isRunning ? "pause" : at === count ? "again" : "play"}
      </button>
      <button type="button" class="button" title="One edit forward (>)" disabled={at === count} onClick={() => playback.step(1)}>
        forward
      </button>
      <label class="row">
        <span class="soft">edits a second</span>
        <select
          class="field playback-pace"
          value={String(playback.pace.value)}
          onChange={(event) => playback.setPace(Number(event.currentTarget.value) as Pace)}
        >
          {PACES.map((pace) => (
            <option key={pace} value={String(pace)}>
              {pace}
            </option>
          ))}
        </select>
      </label>
      <p class="playback-words" aria-live={isRunning ? "off" : "polite"}>
        <span class="figures">
          Edit {countText(at)} of {countText(count)}
        </span>
        {edit === null ? ": before the first edit" : ` (${new Date(edit.t).toLocaleString("en-GB")}): ${edit.label}`}
        {likesStillness() && !isRunning && at < count ? (
          <span class="soft"> · Reduced motion is asked for, so nothing moves by itself: step, or press play.</span>
        ) : null}
      </p>
      <span class="spring" />
      <span class="soft">Only looking: nothing is changed.</span>
      <button type="button" class="button" title="Back to where you were (Esc)" onClick={() => editor.stopPlayback()}>
        stop
      </button>
    </section>
  );
}
