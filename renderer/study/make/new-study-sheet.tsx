import { useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { Sheet } from "#renderer/app/sheet.tsx";
import { draftOfTyped, EMPTY_STUDY, type TypedStudy } from "#renderer/study/make/study-draft.ts";
import { type ChoosableSpecimen, StudyForm } from "#renderer/study/make/study-form.tsx";

export interface NewStudySheetProps {
  readonly services: Services;
  readonly specimens: readonly ChoosableSpecimen[];
  readonly close: () => void;
}

const FORM = "new-study-form";

/** Makes a study and opens its protocol. */
export function NewStudySheet({ services, specimens, close }: NewStudySheetProps) {
  const [typed, setTyped] = useState<TypedStudy>(EMPTY_STUDY);
  const [missing, setMissing] = useState<readonly string[]>([]);
  const [busy, setBusy] = useState(false);
  const make = async () => {
    const order = specimens.map(({ id }) => id);
    const made = draftOfTyped(typed, order);
    if ("missing" in made) {
      setMissing(made.missing);
      return;
    }
    setBusy(true);
    setMissing([]);
    try {
      const view = await services.client.studies.create(made.draft);
      close();
      services.goTo({ screen: "study", study: view.id, part: "protocol" });
    } catch (error) {
      setMissing([error instanceof Error ? error.message : String(error)]);
      setBusy(false);
    }
  };
  const foot = (
    <>
      <button type="button" class="button" onClick={close}>
        Cancel
      </button>
      <button type="submit" form={FORM} class="button main" disabled={busy}>
        Make the study
      </button>
    </>
  );
  return (
    <Sheet title="New study" close={close} foot={foot} kind="packet-sheet">
      <StudyForm
        id={FORM}
        typed={typed}
        change={(part) => setTyped({ ...typed, ...part })}
        specimens={specimens}
        submit={() => void make()}
      />
      <MissingList missing={missing} />
    </Sheet>
  );
}

/** What is missing, one line each. */
export function MissingList({ missing }: { readonly missing: readonly string[] }) {
  return missing.length === 0 ? null : (
    <div class="study-refusal" role="alert">
      <ul>
        {missing.map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
    </div>
  );
}
