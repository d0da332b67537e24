import { useEffect, useRef } from "preact/hooks";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { Readout } from "#renderer/desk/panes/readout.tsx";
import { SectionBar } from "#renderer/desk/panes/section-bar.tsx";
import { mountSection } from "#renderer/desk/panes/section-content.ts";
import { SectionNote } from "#renderer/desk/panes/section-note.tsx";

/** The section: the large plane where all tracing happens. */
export function SectionPane({ model }: { readonly model: DeskModel }) {
  const host = useRef<HTMLDivElement>(null);
  useEffect(() => mountSection(host.current!, model), [model]);
  return (
    <section class="pane section-pane" aria-label="Section">
      <SectionBar model={model} />
      <div class="section-host" ref={host}>
        <SectionNote model={model} />
      </div>
      <Readout model={model} />
    </section>
  );
}
