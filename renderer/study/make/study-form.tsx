import { type Part, planSentence, type TypedStudy } from "#renderer/study/make/study-draft.ts";
import { LongField, NumberField, TextField } from "#renderer/study/parts/fields.tsx";

export interface ChoosableSpecimen {
  readonly id: string;
  readonly name: string;
  readonly synthetic: boolean;
}

export interface StudyFormProps {
  readonly typed: TypedStudy;
  readonly change: (part: Partial<TypedStudy>) => void;
  readonly specimens: readonly ChoosableSpecimen[];
  readonly submit: () => void;
  readonly id: string;
}

const PARTS: readonly { readonly part: Part; readonly label: string }[] = [
  { part: "none", label: "takes no part" },
  { part: "counted", label: "counts" },
  { part: "training", label: "training round" },
];

/** Name, specimens, annotators and passes of a study. */
export function StudyForm({ typed, change, specimens, submit, id }: StudyFormProps) {
  return (
    <form
      id={id}
      class="study-form"
      onSubmit={(event) => {
        event.preventDefault();
        submit();
      }}
    >
      <TextField label="Name of the study" value={typed.name} set={(name) => change({ name })} wide />
      <fieldset class="study-fieldset">
        <legend>Specimens</legend>
        <div class="tick-list">
          {specimens.map((specimen) => (
            <label key={specimen.id} class="part-row">
              <span>
                {specimen.name}
                {specimen.synthetic ? <span class="tag">synthetic</span> : null}
              </span>
              <select
                class="field"
                value={typed.parts[specimen.id] ?? "none"}
                onChange={(event) => change({ parts: { ...typed.parts, [specimen.id]: event.currentTarget.value as Part } })}
              >
                {PARTS.map(({ part, label }) => (
                  <option key={part} value={part}>
                    {label}
                  </option>
                ))}
              </select>
            </label>
          ))}
          {specimens.length === 0 ? <p class="soft">The shelf has no specimen yet. Add a scan first.</p> : null}
        </div>
        <p class="soft study-help">
          The training round comes first, once for everyone, and does not count: it is for learning the protocol.
        </p>
      </fieldset>
      <div class="study-fields">
        <LongField
          label="Annotators, a name a line"
          value={typed.annotators}
          set={(annotators) => change({ annotators })}
          help="Codes such as AN-1 do well: names stay in this library and in the report, and never travel in a packet."
        />
        <NumberField
          label="Passes of each annotator over each specimen"
          value={typed.passes}
          set={(passes) => change({ passes })}
          help="Two or more show how far an annotator differs from themselves. A repeat is shown turned, under another code."
        />
      </div>
      <p role="status">{planSentence(typed)}</p>
    </form>
  );
}
