import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";

/** On the desk of an assignment: its code, its rules, and the way to hand it back. Nothing on any other desk. */
export function AssignmentLine({ model, context }: { readonly model: DeskModel; readonly context: DeskContext }) {
  const view = model.assignment.value;
  if (view === null) return null;
  return (
    <section class="banner assignment-line row" aria-label="Assignment">
      <span>
        Assignment <strong class="figures">{view.code}</strong>
        {view.training ? ", training round" : ""}, by version {view.protocolVersion} of the rules
      </span>
      <span class="spring" />
      <button type="button" class="button" onClick={() => context.screen.openRules()}>
        Rules
      </button>
      <button type="button" class="button" onClick={() => context.screen.handBack()}>
        Hand it back …
      </button>
    </section>
  );
}
