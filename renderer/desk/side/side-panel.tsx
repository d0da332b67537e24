import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { Fields } from "#renderer/desk/side/fields.tsx";
import { FindingList } from "#renderer/desk/side/finding-list.tsx";
import { TreeList } from "#renderer/desk/side/tree-list.tsx";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** Trees and findings, and the labels of what is selected. */
export function SidePanel({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const { tab } = model;
  const left = model.findings.value.filter((finding) => finding.dismissed === null).length;
  const tabs = [
    { name: "trees", label: `Trees ${model.editor.document.value.trees.size}` },
    { name: "findings", label: `Findings ${left}` },
  ] as const;
  return (
    <section class="pane side-panel" aria-label="Trees and findings">
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
            }}
          >
            {label}
          </button>
        ))}
      </div>
      <div class="side-body" id="side-body" role="tabpanel" aria-labelledby={`tab-${tab.value}`} tabIndex={0}>
        {tab.value === "trees" ? <TreeList model={model} /> : <FindingList model={model} context={context} />}
      </div>
      <Fields model={model} />
    </section>
  );
}
