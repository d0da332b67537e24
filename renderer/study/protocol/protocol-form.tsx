import { ChoiceField, LongField, NumberField } from "#renderer/study/parts/fields.tsx";
import { LabelRows } from "#renderer/study/protocol/label-rows.tsx";
import { PointRows, type PointRowsProps } from "#renderer/study/protocol/point-rows.tsx";
import { CHECK_CODES, type ProtocolDraft } from "#renderer/study/protocol/protocol-draft.ts";
import { DEFAULT_SEVERITY, type Severity } from "#shared/checks/finding.ts";
import { PRIMARY_QUANTITIES, type PrimaryQuantity } from "#shared/study/protocol.ts";

export interface ProtocolFormProps extends Pick<PointRowsProps, "keepPicture" | "readPicture" | "failed"> {
  readonly draft: ProtocolDraft;
  readonly change: (part: Partial<ProtocolDraft>) => void;
}

/** Everything a protocol says, to fill in. */
export function ProtocolForm({ draft, change, ...pictures }: ProtocolFormProps) {
  return (
    <>
      <section class="study-group" aria-labelledby="protocol-points">
        <h3 id="protocol-points">Where points are set</h3>
        <p class="soft">Annotators differ most where this is vague. The still picture shows it on a section of a scan.</p>
        <PointRows points={draft.points} set={(points) => change({ points })} {...pictures} />
      </section>
      <section class="study-group" aria-labelledby="protocol-labels">
        <h3 id="protocol-labels">Labels</h3>
        <LabelRows labels={draft.labels} set={(labels) => change({ labels })} />
      </section>
      <Limits draft={draft} change={change} />
      <Analysis draft={draft} change={change} />
      <section class="study-group" aria-labelledby="protocol-remarks">
        <h3 id="protocol-remarks">Remarks</h3>
        <LongField label="Anything else an annotator must know" value={draft.remarks} set={(remarks) => change({ remarks })} />
      </section>
    </>
  );
}

type PartProps = Pick<ProtocolFormProps, "draft" | "change">;

function Limits({ draft, change }: PartProps) {
  return (
    <section class="study-group" aria-labelledby="protocol-limits">
      <h3 id="protocol-limits">What is drawn</h3>
      <div class="study-fields">
        <NumberField
          label="Minimum diameter"
          unit="mm"
          value={draft.minimumDiameter}
          set={(minimumDiameter) => change({ minimumDiameter })}
          help="Thinner strings are not drawn. Empty: no limit, and no overlap above a diameter (OT)."
        />
        <NumberField
          label="Minimum length"
          unit="mm"
          value={draft.minimumLength}
          set={(minimumLength) => change({ minimumLength })}
          help="Shorter stretches are not drawn and not called overlooked. Empty: no limit."
        />
        <NumberField
          label="Most branches at a fork"
          value={draft.mostBranches}
          set={(mostBranches) => change({ mostBranches })}
          help="More are shown as a finding. Empty: no limit."
        />
      </div>
      <details class="study-more">
        <summary>Weight of each check's finding</summary>
        <div class="study-fields">
          {CHECK_CODES.map((code) => (
            <ChoiceField
              key={code}
              label={code}
              value={draft.severities[code] ?? ""}
              set={(severity) => {
                const { [code]: _, ...others } = draft.severities;
                change({ severities: severity === "" ? others : { ...others, [code]: severity } });
              }}
              choices={[
                { value: "", label: `as the program has it (${DEFAULT_SEVERITY[code]})` },
                ...(["error", "warning", "note"] as const).map((severity: Severity) => ({ value: severity, label: severity })),
                { value: "off", label: "not reported" },
              ]}
            />
          ))}
        </div>
      </details>
    </section>
  );
}

function Analysis({ draft, change }: PartProps) {
  return (
    <section class="study-group" aria-labelledby="protocol-analysis">
      <h3 id="protocol-analysis">What the numbers will be</h3>
      <p class="soft">Set before any number is seen: statistics chosen afterwards do not stand a review.</p>
      <div class="study-fields">
        <ChoiceField
          label="Primary quantity"
          value={draft.primary}
          set={(primary) => change({ primary })}
          help="The one quantity that the study is about. All others are descriptive."
          choices={[
            { value: "", label: "not chosen yet" },
            ...PRIMARY_QUANTITIES.map((quantity: PrimaryQuantity) => ({ value: quantity, label: quantity })),
          ]}
        />
        <NumberField
          label="Matching tolerance"
          unit="mm"
          value={draft.tolerance}
          set={(tolerance) => change({ tolerance })}
          help="Strands match within it, nodes within twice of it. Results are repeated at half and at twice."
        />
        <NumberField
          label="Forks count as one below"
          unit="mm"
          value={draft.merge}
          set={(merge) => change({ merge })}
          help="Forks joined by a shorter strand are one fork."
        />
        <NumberField
          label="Displacement as dear as an insertion"
          unit="mm"
          value={draft.positionScale}
          set={(positionScale) => change({ positionScale })}
          help="Scale of the edit distance between two passes."
        />
        <NumberField
          label="Margin"
          unit="mm"
          value={draft.margin}
          set={(margin) => change({ margin })}
          help="A method within it of the annotators counts as equivalent. Empty: no verdict on a method."
        />
        <NumberField
          label="Days between repeats"
          unit="days"
          value={draft.washoutDays}
          set={(washoutDays) => change({ washoutDays })}
          help="From a returned pass to the next assignment of the same specimen to the same annotator."
        />
      </div>
    </section>
  );
}
