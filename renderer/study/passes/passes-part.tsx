import { useState } from "preact/hooks";
import { dateWords } from "#renderer/shelf/words.ts";
import { ChangeStudySheet } from "#renderer/study/make/change-study-sheet.tsx";
import { MakePacketsSheet } from "#renderer/study/packets/make-packets-sheet.tsx";
import { TakeInSheet } from "#renderer/study/packets/take-in-sheet.tsx";
import { CellPanel } from "#renderer/study/passes/cell-panel.tsx";
import { CELL_KINDS, type CellWords, nextStep } from "#renderer/study/passes/grid.ts";
import { PassGridTable } from "#renderer/study/passes/pass-grid.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { StudyView } from "#shared/api/study.ts";

type SheetShown =
  | { readonly sheet: "packets"; readonly chosen: readonly string[] }
  | { readonly sheet: "take-in" | "change" }
  | null;

/** Specimens by annotators and passes, where each stands, and what can be done about it. */
export function PassesPart({ model, view }: { readonly model: StudyModel; readonly view: StudyView }) {
  const [selected, setSelected] = useState<string | null>(null);
  const [shown, setShown] = useState<SheetShown>(null);
  const cell = view.assignments.find(({ id }) => id === selected) ?? null;
  const ready = view.assignments.filter((one) => one.state === "planned" && one.why === null).map(({ id }) => id);
  const training = view.specimens.some((specimen) => specimen.training);
  const problems = view.specimens.flatMap(({ name, problem }) => (problem === null ? [] : [`${name}: ${problem}`]));
  const close = () => setShown(null);
  return (
    <div class="passes-part">
      <div class="passes-grids">
        <div class="study-actions">
          <p class="study-next">{nextStep(view)}</p>
          <button
            type="button"
            class={ready.length > 0 ? "button main" : "button"}
            disabled={view.assignments.length === 0}
            onClick={() => setShown({ sheet: "packets", chosen: ready })}
          >
            Make packets …
          </button>
          <button type="button" class="button" onClick={() => setShown({ sheet: "take-in" })}>
            Take in a packet …
          </button>
          <button type="button" class="button" onClick={() => setShown({ sheet: "change" })}>
            Specimens and annotators …
          </button>
        </div>
        {problems.map((problem) => (
          <p key={problem} class="study-refusal">
            {problem}
          </p>
        ))}
        <PassGridTable view={view} training={false} selected={selected} select={setSelected} />
        {training ? (
          <>
            <h2 class="training-title">Training round</h2>
            <p class="soft">
              Everyone does these first and once, to learn the protocol. They are returned like any other and take no part in the
              analysis.
            </p>
            <PassGridTable view={view} training={true} selected={selected} select={setSelected} />
          </>
        ) : null}
        <Legend />
        <Events view={view} />
      </div>
      <CellPanel
        key={cell?.id ?? "none"}
        model={model}
        view={view}
        cell={cell}
        makePacket={(id) => setShown({ sheet: "packets", chosen: [id] })}
        takeIn={() => setShown({ sheet: "take-in" })}
      />
      {shown?.sheet === "packets" ? <MakePacketsSheet model={model} view={view} chosen={shown.chosen} close={close} /> : null}
      {shown?.sheet === "take-in" ? <TakeInSheet services={model.services} close={close} /> : null}
      {shown?.sheet === "change" ? <ChangeStudySheet model={model} view={view} close={close} /> : null}
    </div>
  );
}

function Legend() {
  return (
    <ul class="grid-legend soft" aria-label="What the marks mean">
      {(Object.keys(CELL_KINDS) as CellWords["kind"][]).map((kind) => (
        <li key={kind}>
          <span class={`cell-mark ${kind}`} aria-hidden="true">
            {CELL_KINDS[kind].mark}
          </span>
          {CELL_KINDS[kind].meaning}
        </li>
      ))}
    </ul>
  );
}

function Events({ view }: { readonly view: StudyView }) {
  return (
    <details class="study-more">
      <summary>What was done in this study ({view.events.length})</summary>
      <ol class="study-events">
        {[...view.events].reverse().map((event, k) => (
          <li key={`${event.at} ${view.events.length - k}`}>
            <span class="soft figures">{dateWords(event.at)}</span> {event.text}
          </li>
        ))}
      </ol>
    </details>
  );
}
