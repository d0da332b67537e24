import { theme } from "#renderer/app/theme-choice.ts";
import { countsOf } from "#renderer/desk/model/counts.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { SavedState } from "#renderer/editor/session/pass-keeper.ts";
import { countOf } from "#renderer/editor/session/words.ts";

export interface HeadLineProps {
  readonly model: DeskModel;
  readonly context: DeskContext;
}

/** Where one is, what is there, and whether it is safe. */
export function HeadLine({ model, context }: HeadLineProps) {
  const { editor } = model;
  editor.revision.value;
  const specimen = model.specimen.value;
  const pass = model.pass.value;
  const counts = countsOf(editor.document.value);
  const waiting = editor.waiting.value.length;
  return (
    <header class="head-line">
      <nav aria-label="Where you are" class="crumbs">
        <button type="button" class="button plain" onClick={() => context.screen.backToShelf()}>
          shelf
        </button>
        <span aria-hidden="true">/</span>
        <span>{specimen.name}</span>
        {specimen.synthetic ? <span class="tag">synthetic</span> : null}
        <span aria-hidden="true">/</span>
        <h1>
          {pass.annotator}, pass {pass.number}
        </h1>
        {pass.state === "finished" ? <span class="tag">finished</span> : null}
      </nav>
      <p class="counts figures">
        {countOf(counts.trees, "tree")} · <span class={counts.open > 0 ? "warn" : ""}>{counts.open} open</span> ·{" "}
        {countOf(counts.doubts, "doubt")}
      </p>
      <div class="saved-state" role="status">
        {waiting > 0 ? (
          <span class="accent">
            {editor.serverAway.value ? `${countOf(waiting, "edit")} waiting to be traced` : `tracing ${countOf(waiting, "edit")}`}
          </span>
        ) : null}
        <Saved state={editor.keeper.saved.value} />
        <span class="soft figures">{countOf(editor.keeper.edits, "edit")}</span>
      </div>
      <div class="head-tools">
        <button
          type="button"
          class="button"
          title="History (Shift + H)"
          aria-pressed={model.historyShown.value}
          onClick={() => context.screen.toggleHistory()}
        >
          history
        </button>
        <button type="button" class="button" title="Export the trees (Ctrl + E)" onClick={() => context.screen.openExport()}>
          export
        </button>
        <button type="button" class="button" title="Keys (?)" onClick={() => context.screen.openKeyHelp()}>
          keys
        </button>
        <button type="button" class="button" title="Light or dark (Shift + L)" onClick={() => context.screen.toggleTheme()}>
          {theme.value === "dark" ? "light" : "dark"}
        </button>
        <button
          type="button"
          class="button"
          title="All commands by group"
          aria-haspopup="dialog"
          onClick={() => context.screen.openMenu()}
        >
          menu
        </button>
      </div>
    </header>
  );
}

function Saved({ state }: { readonly state: SavedState }) {
  switch (state.kind) {
    case "saved":
      return <span class="good">{state.at === null ? "saved" : `saved ${new Date(state.at).toLocaleTimeString("en-GB")}`}</span>;
    case "saving":
      return <span>saving</span>;
    case "waiting":
      return <span class="warn">{countOf(state.records, "record")} kept here, waiting to be sent</span>;
    case "stuck":
      return (
        <span class="warn" title={state.message}>
          {countOf(state.records, "record")} kept here, not saved: {state.message}
        </span>
      );
  }
}
