import { useSignal } from "@preact/signals";
import { MERGES_MM, type SideBySideModel, TOLERANCE_MM } from "#renderer/study/side-by-side/side-by-side-model.ts";
import type { CompareProgress } from "#shared/compare/comparison.ts";
import { wholeNumbers } from "#shared/compare/comparison-words.ts";

/** The numbers on the whole sets, each of which opens what it means; and what the comparison counts with. */
export function NumberLine({ model }: { readonly model: SideBySideModel }) {
  const asked = useSignal<string | null>(null);
  const state = model.run.state.value;
  const comparison = model.comparison.value;
  const numbers = comparison === null ? [] : wholeNumbers(comparison.whole, TOLERANCE_MM);
  const open = numbers.find(({ name }) => name === asked.value);
  return (
    <section class="number-line" aria-label="The whole sets">
      <div class="numbers">
        {numbers.map(({ name, label, text }) => (
          <button
            key={name}
            type="button"
            class="number"
            aria-expanded={asked.value === name}
            aria-controls="number-meaning"
            title="What this number means"
            onClick={() => {
              asked.value = asked.value === name ? null : name;
            }}
            onKeyDown={(event) => {
              if (event.key !== "Escape" || asked.value === null) return;
              event.preventDefault();
              asked.value = null;
            }}
          >
            <span class="number-label">{label}</span>
            <span class="figures number-value">{text}</span>
          </button>
        ))}
        {state.kind === "running" ? (
          <div class="comparing" role="status">
            <progress aria-label="Comparing" {...shareOf(state.progress)} />
            <span>{progressWords(state.progress)}</span>
            <button type="button" class="button" onClick={() => model.run.cancel()}>
              stop
            </button>
          </div>
        ) : null}
        {state.kind === "failed" || state.kind === "cancelled" ? (
          <div class="comparing" role="alert">
            <span class="warn">
              {state.kind === "failed" ? `The comparison failed: ${state.message}` : "The comparison was stopped."}
            </span>
            <button type="button" class="button" onClick={() => model.again()}>
              compare again
            </button>
          </div>
        ) : null}
        <span class="spring" />
        <Choices model={model} />
      </div>
      <p id="number-meaning" class="number-meaning" role="status" hidden={open === undefined}>
        {open === undefined ? "" : <strong>{open.label}: </strong>}
        {open?.definition}
      </p>
    </section>
  );
}

function Choices({ model }: { readonly model: SideBySideModel }) {
  const chosen = model.options.value;
  const set = (change: Partial<typeof chosen>) => {
    model.options.value = { ...chosen, ...change };
  };
  return (
    <>
      <label class="compare-choice">
        <span class="soft">costs</span>
        <select
          class="field"
          value={chosen.preset}
          onChange={(event) => set({ preset: event.currentTarget.value === "structure" ? "structure" : "geometry" })}
        >
          <option value="geometry">places and lengths</option>
          <option value="structure">structure alone</option>
        </select>
      </label>
      <label class="compare-choice">
        <span class="soft">origins</span>
        <select
          class="field"
          value={chosen.origin}
          onChange={(event) => set({ origin: event.currentTarget.value === "free" ? "free" : "held" })}
        >
          <option value="held">held</option>
          <option value="free">free</option>
        </select>
      </label>
      <label class="compare-choice">
        <span class="soft">merge forks below</span>
        <select
          class="field"
          value={String(chosen.merge)}
          onChange={(event) => set({ merge: Number(event.currentTarget.value) })}
        >
          {MERGES_MM.map((mm) => (
            <option key={mm} value={String(mm)}>
              {mm === 0 ? "none" : `${mm} mm`}
            </option>
          ))}
        </select>
      </label>
    </>
  );
}

function shareOf({ begun, of }: CompareProgress): { value?: number; max?: number } {
  return of === 0 ? {} : { value: begun - 1, max: of };
}

function progressWords({ stage, begun, of }: CompareProgress): string {
  switch (stage) {
    case "matching":
      return "finding which tree is which";
    case "pairs":
      return `comparing pair ${begun} of ${of}`;
    case "events":
      return "naming the differences";
    case "whole":
      return "measuring the whole sets";
  }
}
