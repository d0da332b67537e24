import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { Fields } from "#renderer/desk/side/fields.tsx";
import { FindingList } from "#renderer/desk/side/finding-list.tsx";
import { OverlookedList } from "#renderer/desk/side/overlooked-list.tsx";
import { TreeList } from "#renderer/desk/side/tree-list.tsx";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** "Overlooked 12"; a dash while nothing was searched. */
function overlookedLabel({ overlooked }: DeskModel): string {
  const answer = overlooked.answer.value;
  return answer === null || answer.search.done === 0 ? "Overlooked –" : `Overlooked ${overlooked.standing.value.length}`;
}

/** Trees, findings, what was overlooked, and the labels of what is selected. */
export function SidePanel({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const { tab } = model;
  const left = model.findings.value.filter((finding) => finding.dismissed === null).length;
  const tabs = [
    { name: "trees", label: `Trees ${model.editor.document.value.trees.size}` },
    { name: "findings", label: `Findings ${left}` },
    { name: "overlooked", label: overlookedLabel(model) },
  ] as const;
  return (
    <section class="pane side-panel" aria-label="Trees, findings and what was overlooked">
      <div class="tabs" role="tablist">
        {tabs.map(({ name, label }) => (
          <button
            key={name}
            type="button"
            role="tab"
            id={`tab-${name}`}
            class="tab"
            aria-selected={tab.value === name}
            aria-controls="side-body"
            onClick={() => {
              tab.value = name;
              if (name === "overlooked") void model.overlooked.look();
            }}
          >
            {label}
          </button>
        ))}
      </div>
      <div class="side-body" id="side-body" role="tabpanel" aria-labelledby={`tab-${tab.value}`} tabIndex={0}>
        {tab.value === "trees" ? <TreeList model={model} /> : null}
        {tab.value === "findings" ? <FindingList model={model} context={context} /> : null}
        {tab.value === "overlooked" ? <OverlookedList model={model} context={context} /> : null}
      </div>
      <Fields model={model} />
    </section>
  );
}
