import { useState } from "preact/hooks";
import { plural } from "#renderer/shelf/words.ts";
import { ChoiceField, NumberField } from "#renderer/study/parts/fields.tsx";
import {
  FIRST_PLANNING,
  type PlanningAnswer,
  type PlanningDraft,
  planningAnswer,
} from "#renderer/study/planning/planning-answer.ts";

/** How many specimens a study needs; nothing here is kept, it only counts. @param annotators of the study, to begin with */
export function PlanningPanel({ annotators }: { readonly annotators: number }) {
  const [draft, setDraft] = useState<PlanningDraft>({ ...FIRST_PLANNING, annotators: String(Math.max(2, annotators)) });
  const change = (part: Partial<PlanningDraft>) => setDraft({ ...draft, ...part });
  return (
    <section class="pane study-part" aria-labelledby="planning-title">
      <h2 id="planning-title">How many specimens</h2>
      <p class="soft study-lead">
        A reviewer asks why the study has as many specimens as it has. This counts them beforehand, for the primary quantity of
        the protocol. Both formulas count independent subjects: strands of one valve are not independent, so the answer is in
        specimens.
      </p>
      <div class="study-fields">
        <ChoiceField
          label="The study shall"
          value={draft.goal}
          set={(goal) => change({ goal })}
          choices={[
            { value: "width", label: "give an interval of a wished width" },
            { value: "test", label: "show more than a least agreement" },
          ]}
        />
        <ChoiceField
          label="The primary quantity is taken"
          value={draft.per}
          set={(per) => change({ per })}
          choices={[
            { value: "specimen", label: "once a specimen (a total)" },
            { value: "strand", label: "on each strand" },
          ]}
        />
        <NumberField label="Annotators" value={draft.annotators} set={(value) => change({ annotators: value })} />
        <NumberField
          label="Expected intraclass correlation"
          value={draft.expected}
          set={(expected) => change({ expected })}
          help="From a training round, or from studies like this one. Expect less rather than more."
        />
        {draft.goal === "width" ? (
          <NumberField
            label="Width of the 95 % interval"
            value={draft.width}
            set={(width) => change({ width })}
            help="The whole width: 0.2 is 0.1 on each side."
          />
        ) : (
          <>
            <NumberField
              label="Least acceptable correlation"
              value={draft.least}
              set={(least) => change({ least })}
              help="Agreement at or below this would not do."
            />
            <NumberField
              label="Power"
              value={draft.power}
              set={(power) => change({ power })}
              help="Chance that the study shows it when the expected correlation is true. One-sided test at 5 %."
            />
          </>
        )}
        {draft.per === "strand" ? (
          <>
            <NumberField
              label="Strands a specimen"
              value={draft.strandsPerSpecimen}
              set={(strandsPerSpecimen) => change({ strandsPerSpecimen })}
            />
            <NumberField
              label="Correlation of strands of one specimen"
              value={draft.rho}
              set={(rho) => change({ rho })}
              help="0: as good as strands of different valves. 1: a second strand adds nothing."
            />
          </>
        ) : null}
      </div>
      <Answer answer={planningAnswer(draft)} annotators={draft.annotators} />
    </section>
  );
}

function Answer({ answer, annotators }: { readonly answer: PlanningAnswer; readonly annotators: string }) {
  if (answer.kind === "problem") {
    return (
      <p class="warn planning-answer" role="status">
        {answer.sentence}
      </p>
    );
  }
  const { specimens, exact, subjects, corrected, source, clustered } = answer;
  return (
    <div class="planning-answer" role="status">
      <p class="planning-number">
        {plural(specimens, "specimen")}, each done by {annotators} annotators
      </p>
      <p class="soft">
        {plural(subjects, "independent subject")} ({exact.toFixed(2)} before rounding up
        {corrected ? ", with the correction for two annotators and a correlation of 0.7 or more" : ""}). {source}.
      </p>
      {clustered === null ? null : (
        <p class="soft">
          Strands of one specimen resemble each other: design effect {clustered.designEffect.toFixed(2)}, so{" "}
          {plural(clustered.strands, "strand")} in all.
        </p>
      )}
    </div>
  );
}
