import { useEffect, useState } from "preact/hooks";
import { Sheet } from "#renderer/app/sheet.tsx";
import { MissingList } from "#renderer/study/make/new-study-sheet.tsx";
import { draftOfTyped, type TypedStudy, typedOf } from "#renderer/study/make/study-draft.ts";
import { type ChoosableSpecimen, StudyForm } from "#renderer/study/make/study-form.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { StudyView } from "#shared/api/study.ts";

export interface ChangeStudySheetProps {
  readonly model: StudyModel;
  readonly view: StudyView;
  readonly close: () => void;
}

const FORM = "change-study-form";

/** Changes who and what takes part. What is out already stays. */
export function ChangeStudySheet({ model, view, close }: ChangeStudySheetProps) {
  const { client, goTo } = model.services;
  const [typed, setTyped] = useState<TypedStudy>(() => typedOf(view));
  const [specimens, setSpecimens] = useState<readonly ChoosableSpecimen[] | null>(null);
  const [missing, setMissing] = useState<readonly string[]>([]);
  const out = view.assignments.some(({ state, setAside }) => state !== "planned" || setAside.length > 0);
  useEffect(() => {
    Promise.all([client.shelf(), client.studies.all()])
      .then(([shelf, studies]) => {
        const taken = new Set(studies.assignments.map(({ specimen }) => specimen));
        const here = shelf.specimens.flatMap(({ specimen: { id, name, synthetic } }) =>
          taken.has(id) ? [] : [{ id, name, synthetic }],
        );
        // Specimens of the study that are gone from the library can still be taken out of it.
        const gone = view.specimens.filter(({ id }) => !here.some((one) => one.id === id));
        setSpecimens([...here, ...gone.map(({ id, name }) => ({ id, name, synthetic: false }))]);
      })
      .catch((error: unknown) => setMissing([error instanceof Error ? error.message : String(error)]));
  }, [client, view]);
  const save = async () => {
    const made = draftOfTyped(typed, specimens?.map(({ id }) => id) ?? []);
    if ("missing" in made) {
      setMissing(made.missing);
      return;
    }
    const failure = await model.change(() => client.studies.change(view.id, made.draft));
    if (failure === null) close();
    else setMissing([failure]);
  };
  const remove = async () => {
    try {
      await client.studies.remove(view.id);
      model.services.notices.news(`The study ${view.name} was removed. Its specimens and passes stay in the library.`);
      goTo({ screen: "shelf" });
    } catch (error) {
      setMissing([error instanceof Error ? error.message : String(error)]);
    }
  };
  const foot = (
    <>
      {out ? null : (
        <button type="button" class="button danger sheet-left" onClick={() => void remove()}>
          Remove the study
        </button>
      )}
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="submit" form={FORM} class="button main" disabled={specimens === null || model.busy.value}>
        Keep the changes
      </button>
    </>
  );
  return (
    <Sheet title="Specimens and annotators" close={close} foot={foot} kind="packet-sheet">
      {out ? <p class="soft">Packets are out: what they belong to stays in the study. More can be added.</p> : null}
      {specimens === null && missing.length === 0 ? (
        <p class="soft">Reading the shelf</p>
      ) : (
        <StudyForm
          id={FORM}
          typed={typed}
          change={(part) => setTyped({ ...typed, ...part })}
          specimens={specimens ?? []}
          submit={() => void save()}
        />
      )}
      <MissingList missing={missing} />
    </Sheet>
  );
}
