import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { goToFinding } from "#renderer/desk/model/go-to-finding.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

const MARK = { error: "!", warning: "△", note: "·" } as const;
const WORD = { error: "error", warning: "warning", note: "note" } as const;

/** Findings one by one: go there, mend, or dismiss with a reason. */
export function FindingList({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const findings = model.findings.value;
  const { editor } = model;
  if (findings.length === 0) return <p class="empty">No finding. The trees are whole: rooted, connected, every end said.</p>;
  return (
    <ul class="finding-list">
      {findings.map((finding) => {
        const current = model.findingAt.value === finding.key;
        return (
          <li key={finding.key} class={finding.dismissed === null ? "" : "dismissed"}>
            <button type="button" class="finding-row" aria-pressed={current} onClick={() => goToFinding(model, finding)}>
              <span class={`severity ${finding.severity}`}>
                <span aria-hidden="true">{MARK[finding.severity]}</span>
                <span class="unseen">{WORD[finding.severity]}</span>
              </span>
              <span>
                {finding.message}
                {finding.dismissed === null ? null : <em class="soft"> Dismissed: {finding.dismissed}</em>}
              </span>
            </button>
            {current && !editor.readOnly ? (
              <div class="row finding-actions">
                {finding.dismissed === null ? (
                  <button type="button" class="button" onClick={() => context.screen.dismissFinding()}>
                    dismiss with a reason
                  </button>
                ) : (
                  <button
                    type="button"
                    class="button"
                    onClick={() => editor.do({ do: "dismiss", args: { key: finding.key, reason: null } })}
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
  );
}
