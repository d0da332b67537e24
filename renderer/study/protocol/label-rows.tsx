import type { LabelDraft } from "#renderer/study/protocol/protocol-draft.ts";
import type { LabelPlace } from "#shared/study/protocol.ts";

const PLACES: readonly { readonly on: LabelPlace; readonly label: string }[] = [
  { on: "origin", label: "origins" },
  { on: "fork", label: "forks" },
  { on: "insertion", label: "insertions" },
  { on: "end", label: "any end" },
  { on: "strand", label: "strands" },
];
const KNOWN = ["leaflet", "segment", "zone", "cleft", "strut", "muscle", "head", "site"];

export interface LabelRowsProps {
  readonly labels: readonly LabelDraft[];
  readonly set: (labels: readonly LabelDraft[]) => void;
}

/** The labels that annotators set: a row for each. */
export function LabelRows({ labels, set }: LabelRowsProps) {
  const change = (k: number, part: Partial<LabelDraft>) =>
    set(labels.map((label, i) => (i === k ? { ...label, ...part } : label)));
  return (
    <div class="study-rows">
      <datalist id="known-labels">
        {KNOWN.map((label) => (
          <option key={label} value={label} />
        ))}
      </datalist>
      {labels.map((label, k) => (
        // Rows are told apart by their place alone: two may have the same word while one is being typed.
        <div key={`${k} of ${labels.length}`} class="study-row label-row" role="group" aria-label={`Label ${k + 1}`}>
          <label class="stacked">
            <span>Label</span>
            <input
              class="field"
              list="known-labels"
              value={label.label}
              maxLength={40}
              onInput={(event) => change(k, { label: event.currentTarget.value })}
            />
          </label>
          <label class="stacked">
            <span>on</span>
            <select
              class="field"
              value={label.on}
              onChange={(event) => change(k, { on: event.currentTarget.value as LabelPlace })}
            >
              {PLACES.map((place) => (
                <option key={place.on} value={place.on}>
                  {place.label}
                </option>
              ))}
            </select>
          </label>
          <label class="stacked">
            <span>Values, between commas</span>
            <input
              class="field"
              value={label.values}
              maxLength={400}
              placeholder={KNOWN.includes(label.label) ? "as the program has them" : "free text"}
              onInput={(event) => change(k, { values: event.currentTarget.value })}
            />
          </label>
          <label class="scan-choice">
            <input
              type="checkbox"
              checked={label.required}
              onChange={(event) => change(k, { required: event.currentTarget.checked })}
            />
            <span>required</span>
          </label>
          <button type="button" class="button plain" onClick={() => set(labels.filter((_, i) => i !== k))}>
            Take out<span class="unseen"> label {label.label === "" ? k + 1 : label.label}</span>
          </button>
        </div>
      ))}
      {labels.length === 0 ? <p class="soft">No labels are asked for.</p> : null}
      <div>
        <button
          type="button"
          class="button"
          onClick={() => set([...labels, { label: "", on: "insertion", values: "", required: false }])}
        >
          Add a label
        </button>
      </div>
    </div>
  );
}
