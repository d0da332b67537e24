import { useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { plural } from "#renderer/shelf/words.ts";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { StudyView } from "#shared/api/study.ts";

export interface FreezeSheetProps {
  readonly model: StudyModel;
  readonly view: StudyView;
  readonly close: () => void;
}

/** Says plainly what freezing means, what is missing and what is worth knowing, and freezes. */
export function FreezeSheet({ model, view, close }: FreezeSheetProps) {
  const [failure, setFailure] = useState<string | null>(null);
  const { version, missing, remarks, content } = view.protocol;
  const first = view.assignments.length === 0;
  const planned = view.specimens.reduce((sum, { training }) => sum + (training ? 1 : view.passes), 0) * view.annotators.length;
  const freeze = async () => {
    const why = await model.change(() => model.services.client.studies.freezeProtocol(view.id));
    setFailure(why);
    if (why !== null) return;
    close();
    model.services.notices.news(`Version ${version} of the protocol is frozen.`);
    model.services.goTo({ screen: "study", study: view.id, part: "passes" });
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Not yet
      </button>
      <button type="button" class="button main" disabled={missing.length > 0 || model.busy.value} onClick={() => void freeze()}>
        Freeze version {version}
      </button>
    </>
  );
  return (
    <Sheet title={`Freeze version ${version} of the protocol?`} close={close} foot={foot} kind="small-sheet">
      <p>
        <strong>Frozen means: this version never changes again.</strong> What annotators draw by, and what the numbers will be, is
        settled before anyone sees a pass. A later version can follow; the report then says that there was one, and why.
      </p>
      {first ? (
        <p>
          With it, {plural(planned, "assignment")} are drawn by lot: a code for each, the order for each annotator, and how the
          valve is turned in each. Packets can be made then.
        </p>
      ) : null}
      {content.analysis.primary === null ? null : (
        <p>
          Primary quantity: <strong>{content.analysis.primary}</strong>. Margin:{" "}
          {content.analysis.marginMm === null ? "none" : `${content.analysis.marginMm} mm`}. Days between repeats:{" "}
          {content.schedule.washoutDays}.
        </p>
      )}
      {missing.length === 0 ? null : (
        <>
          <p class="warn">It cannot be frozen yet:</p>
          <ul class="study-refusal">
            {missing.map((sentence) => (
              <li key={sentence}>{sentence}</li>
            ))}
          </ul>
        </>
      )}
      {remarks.length === 0 ? null : (
        <>
          <p>Worth knowing beforehand:</p>
          <ul class="soft">
            {remarks.map((sentence) => (
              <li key={sentence}>{sentence}</li>
            ))}
          </ul>
        </>
      )}
      {failure === null ? null : (
        <p class="study-refusal" role="alert">
          {failure}
        </p>
      )}
    </Sheet>
  );
}
