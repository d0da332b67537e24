import { useEffect, useMemo } from "preact/hooks";
import { listenToKeys } from "#renderer/desk/model/keys.ts";
import { StripPane } from "#renderer/desk/panes/strip-pane.tsx";
import { shownShortcut } from "#renderer/editor/commands/shortcut.ts";
import { DifferenceList } from "#renderer/study/side-by-side/difference-list.tsx";
import { NumberLine } from "#renderer/study/side-by-side/number-line.tsx";
import { PairSection } from "#renderer/study/side-by-side/pair-section.tsx";
import { PairSpace } from "#renderer/study/side-by-side/pair-space.tsx";
import { SIDE_BY_SIDE_COMMANDS, sideBySideCommandFor } from "#renderer/study/side-by-side/side-by-side-commands.ts";
import { sideBySideContext } from "#renderer/study/side-by-side/side-by-side-context.ts";
import { SideBySideHead } from "#renderer/study/side-by-side/side-by-side-head.tsx";
import type { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SideBySideSheets } from "#renderer/study/side-by-side/side-by-side-sheets.tsx";
import { StripSideChoice } from "#renderer/study/side-by-side/strip-side-choice.tsx";

/** The whole screen: head, numbers, strip, section, space with the list of differences below it, foot. */
export function SideBySideScreen({ model }: { readonly model: SideBySideModel }) {
  const context = useMemo(() => sideBySideContext(model), [model]);
  useEffect(() => listenToKeys(context, sideBySideCommandFor), [context]);
  const cautions = [model.a, model.b].flatMap(({ label, caution }) => (caution === null ? [] : [`${label}: ${caution}`]));
  return (
    <div class="desk side-by-side">
      <SideBySideHead model={model} context={context} />
      {cautions.map((caution) => (
        <div key={caution} class="banner" role="status">
          {caution}
        </div>
      ))}
      <NumberLine model={model} />
      <main class="desk-panes">
        <div class="pair-strip">
          <StripSideChoice model={model} />
          <StripPane model={model} />
        </div>
        <PairSection model={model} />
        <div class="desk-right pair-right">
          <PairSpace model={model} />
          <DifferenceList model={model} />
        </div>
      </main>
      <footer class="foot-line" aria-label="What the keys do now">
        {SIDE_BY_SIDE_COMMANDS.map((command) => {
          const words = command.foot?.(context) ?? null;
          return words === null ? null : (
            <span key={command.name} class="foot-hint">
              <span class="key">{shownShortcut(command.keys[0]!)}</span> {words}
            </span>
          );
        })}
        <span class="spring" />
        <span class="foot-hint soft">
          <span class="key">?</span> keys
        </span>
      </footer>
      <SideBySideSheets model={model} />
    </div>
  );
}
