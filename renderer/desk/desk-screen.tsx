import { useEffect, useMemo } from "preact/hooks";
import { AssignmentLine } from "#renderer/desk/lines/assignment-line.tsx";
import { FootLine } from "#renderer/desk/lines/foot-line.tsx";
import { HeadLine } from "#renderer/desk/lines/head-line.tsx";
import { PlaybackBar } from "#renderer/desk/lines/playback-bar.tsx";
import { WhyReadOnly } from "#renderer/desk/lines/why-read-only.tsx";
import { deskContext } from "#renderer/desk/model/desk-context.ts";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { listenToKeys } from "#renderer/desk/model/keys.ts";
import { keepMenus } from "#renderer/desk/model/menus.ts";
import { SectionPane } from "#renderer/desk/panes/section-pane.tsx";
import { SpacePane } from "#renderer/desk/panes/space-pane.tsx";
import { StripPane } from "#renderer/desk/panes/strip-pane.tsx";
import { DeskSheets } from "#renderer/desk/sheets/desk-sheets.tsx";
import { HistoryDrawer } from "#renderer/desk/side/history-drawer.tsx";
import { SidePanel } from "#renderer/desk/side/side-panel.tsx";
import { commandFor } from "#renderer/editor/commands/command-table.ts";

/** The desk: head line, strip, section, space with the list below it, foot line; sheets and the history over them. */
export function DeskScreen({ model }: { readonly model: DeskModel }) {
  const context = useMemo(() => deskContext(model), [model]);
  useEffect(() => listenToKeys(context, commandFor), [context]);
  useEffect(() => keepMenus(model.services.capabilities.menus, context), [model, context]);
  return (
    <div class="desk">
      <HeadLine model={model} context={context} />
      <AssignmentLine model={model} context={context} />
      <WhyReadOnly model={model} />
      <PlaybackBar model={model} />
      <main class="desk-panes">
        <StripPane model={model} />
        <SectionPane model={model} />
        <div class="desk-right">
          <SpacePane model={model} />
          <SidePanel model={model} context={context} />
        </div>
        {model.historyShown.value ? <HistoryDrawer model={model} /> : null}
      </main>
      <FootLine context={context} />
      <DeskSheets model={model} context={context} />
    </div>
  );
}
