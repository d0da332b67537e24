import { useCallback, useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import type { DeskModel } from "#renderer/desk/model/desk-model.ts";
import { selectNode } from "#renderer/editor/selection.ts";
import { countOf } from "#renderer/editor/session/words.ts";
import { OpenEndList } from "#renderer/study/packets/open-end-list.tsx";
import { RulesView } from "#renderer/study/protocol/rules-view.tsx";
import type { AssignmentView, OpenEnd } from "#shared/api/study.ts";
import { openEndsOf } from "#shared/study/returned-log.ts";
import type { NodeId } from "#shared/trees/document.ts";

/** On the desk of an assignment: its rules, and the way to hand it back. Nothing on any other desk. */
export function AssignmentLine({ model }: { readonly model: DeskModel }) {
  const [view, setView] = useState<AssignmentView | null>(null);
  const [shown, setShown] = useState<"rules" | "open-ends" | null>(null);
  const { services } = model;
  const { id } = model.specimen.value;
  useEffect(() => {
    let current = true;
    const find = async () => {
      const { assignments } = await services.client.studies.all();
      if (!assignments.some(({ specimen }) => specimen === id)) return;
      const found = await services.client.studies.assignment(id);
      if (current) setView(found);
    };
    find().catch((error: unknown) => services.notices.failed(error));
    return () => {
      current = false;
    };
  }, [services, id]);
  const readPicture = useCallback((picture: string) => services.client.studies.assignmentPicture(id, picture), [services, id]);
  if (view === null) return null;
  const handBack = async () => {
    await settle(model);
    if (openEndsOf(model.editor.document.value).length > 0) setShown("open-ends");
    else services.goTo({ screen: "shelf", handBack: id });
  };
  return (
    <div class="banner assignment-line row" role="status">
      <span>
        Assignment <strong class="figures">{view.code}</strong>
        {view.training ? ", training round" : ""}, by version {view.protocolVersion} of the rules
      </span>
      <span class="spring" />
      <button type="button" class="button" onClick={() => setShown("rules")}>
        Rules
      </button>
      <button type="button" class="button" onClick={() => void handBack()}>
        Hand it back …
      </button>
      {shown === "rules" ? (
        <Sheet title={`Rules for ${view.code}`} close={() => setShown(null)}>
          <RulesView rules={view.rules} readPicture={readPicture} />
        </Sheet>
      ) : null}
      {shown === "open-ends" ? <OpenEndsSheet model={model} close={() => setShown(null)} /> : null}
    </div>
  );
}

/** What is unfinished, named, before the pass goes out of hand. */
function OpenEndsSheet({ model, close }: { readonly model: DeskModel; readonly close: () => void }) {
  const { services, editor, section } = model;
  const ends = openEndsOf(editor.document.value);
  const show = ({ node }: OpenEnd) => {
    const document = editor.document.value;
    const found = document.nodes.get(node as NodeId);
    if (found === undefined) return;
    close();
    editor.selection.value = selectNode(document, found.id);
    section.goTo(found.position);
  };
  const foot = (
    <>
      <button
        type="button"
        class="button"
        onClick={() => {
          close();
          services.goTo({ screen: "shelf", handBack: model.specimen.value.id });
        }}
      >
        Hand it back as it is …
      </button>
      <button type="button" class="button main" onClick={close}>
        Go on drawing
      </button>
    </>
  );
  return (
    <Sheet title={`${countOf(ends.length, "end")} still open`} close={close} foot={foot} kind="small-sheet">
      <p>
        An open end is unfinished work, and a returned pass with one is refused unless the study lead allows it. Say of each how
        it ends, or take the strand away.
      </p>
      <OpenEndList ends={ends} show={show} />
    </Sheet>
  );
}

/** Leaves a strand under way as it is, and waits until every edit is made and written. */
async function settle({ editor }: DeskModel): Promise<void> {
  editor.carried.value = null;
  editor.do({ do: "leave" });
  await editor.settled();
  await editor.keeper.settled();
}
