import type { Services } from "#renderer/app/services.ts";
import { SpecimenPicture } from "#renderer/shelf/specimen-picture.tsx";
import { dateWords, passWords } from "#renderer/shelf/words.ts";
import { HandBackSheet } from "#renderer/study/packets/hand-back-sheet.tsx";
import type { ShelfSpecimen } from "#shared/api/specimen.ts";
import type { AssignmentSummary } from "#shared/api/study.ts";

export interface AssignmentRowsProps {
  readonly services: Services;
  readonly assignments: readonly AssignmentSummary[];
  /** What the shelf says of the scans; an assignment that was handed back is not among them. */
  readonly shelf: readonly ShelfSpecimen[];
  /** The assignment that is being handed back; null = none. */
  readonly handBack: string | null;
}

/** Assignments to work on, a row each: a code, and nothing that tells which valve it is. */
export function AssignmentRows({ services, assignments, shelf, handBack }: AssignmentRowsProps) {
  if (assignments.length === 0) return null;
  return (
    <section class="shelf-group" aria-label="Assignments">
      <ul class="shelf-rows">
        {assignments.map((assignment) => (
          <AssignmentRow
            key={assignment.specimen}
            services={services}
            assignment={assignment}
            asking={handBack === assignment.specimen}
            shown={shelf.find(({ specimen }) => specimen.id === assignment.specimen)}
          />
        ))}
      </ul>
    </section>
  );
}

interface AssignmentRowProps {
  readonly services: Services;
  readonly assignment: AssignmentSummary;
  readonly shown: ShelfSpecimen | undefined;
  readonly asking: boolean;
}

function AssignmentRow({ services, assignment, shown, asking }: AssignmentRowProps) {
  const { specimen, code, pass, state, taken } = assignment;
  const summary = shown?.passes.find(({ id }) => id === pass);
  const reopen = async () => {
    try {
      await services.client.studies.reopen(specimen);
      services.goTo({ screen: "desk", specimen, pass });
    } catch (error) {
      services.notices.failed(error);
    }
  };
  return (
    <li class="pane shelf-study" aria-labelledby={`assignment-${specimen}`}>
      {shown === undefined ? null : <SpecimenPicture client={services.client} shown={shown} />}
      <div>
        <h2 id={`assignment-${specimen}`}>
          <span class="figures">{code}</span> <span class="shelf-tag">assignment</span>
          <span class={state === "returned" ? "shelf-state done" : "shelf-state"}>
            {state === "returned" ? "handed back" : "to be drawn"}
          </span>
        </h2>
        <p>{summary === undefined ? "" : passWords(summary)}</p>
        <p class="soft">
          taken in {dateWords(taken)}. It goes by its code alone: which valve it is, and what others drew, is kept from you until
          the study is done.
        </p>
      </div>
      <div class="shelf-next">
        {state === "returned" ? (
          <button type="button" class="button" onClick={() => void reopen()}>
            Open it again to mend it<span class="unseen"> {code}</span>
          </button>
        ) : (
          <>
            <button type="button" class="button main" onClick={() => services.goTo({ screen: "desk", specimen, pass })}>
              Open<span class="unseen"> assignment {code}</span>
            </button>
            <button type="button" class="button" onClick={() => services.goTo({ screen: "shelf", handBack: specimen })}>
              Hand it back …<span class="unseen"> {code}</span>
            </button>
          </>
        )}
      </div>
      {asking ? <HandBackSheet services={services} specimen={specimen} close={() => services.goTo({ screen: "shelf" })} /> : null}
    </li>
  );
}
