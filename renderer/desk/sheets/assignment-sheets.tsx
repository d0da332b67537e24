import { useCallback } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { goToOpenEnd } from "#renderer/desk/model/hand-back.ts";
import type { DeskSheetProps } from "#renderer/desk/sheets/sheet-props.ts";
import { countOf } from "#renderer/editor/session/words.ts";
import { OpenEndList } from "#renderer/study/packets/open-end-list.tsx";
import { RulesView } from "#renderer/study/protocol/rules-view.tsx";
import { openEndsOf } from "#shared/study/returned-log.ts";

/** The rules that the assignment is drawn by. */
export function RulesSheet({ model, close }: DeskSheetProps) {
  const { services, specimen } = model;
  const { id } = specimen.value;
  const readPicture = useCallback((picture: string) => services.client.studies.assignmentPicture(id, picture), [services, id]);
  const view = model.assignment.value;
  if (view === null) return null;
  return (
    <Sheet title={`Rules for ${view.code}`} close={close}>
      <RulesView rules={view.rules} readPicture={readPicture} />
    </Sheet>
  );
}

/** What is unfinished, named, before the pass goes out of hand. */
export function OpenEndsSheet({ model, close }: DeskSheetProps) {
  const { services, editor, specimen } = model;
  const ends = openEndsOf(editor.document.value);
  const asItIs = () => {
    close();
    services.goTo({ screen: "shelf", handBack: specimen.value.id });
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={asItIs}>
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
      <OpenEndList
        ends={ends}
        show={(end) => {
          close();
          goToOpenEnd(model, end);
        }}
      />
    </Sheet>
  );
}
