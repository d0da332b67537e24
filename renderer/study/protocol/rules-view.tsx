import { StillPicture } from "#renderer/study/protocol/still-picture.tsx";
import type { DrawingRules, LabelPlace } from "#shared/study/protocol.ts";

export interface RulesViewProps {
  readonly rules: DrawingRules;
  readonly readPicture: (sha256: string) => Promise<Blob>;
}

const PLACES: Readonly<Record<LabelPlace, string>> = {
  origin: "origins",
  fork: "forks",
  insertion: "insertions",
  end: "ends",
  strand: "strands",
};

/** What an annotator draws by, to be read. */
export function RulesView({ rules: { points, labels, limits, remarks }, readPicture }: RulesViewProps) {
  const limitLines = [
    limits.minimumDiameterMm === null ? null : `Strings thinner than ${limits.minimumDiameterMm} mm are not drawn.`,
    limits.minimumLengthMm === null ? null : `Stretches shorter than ${limits.minimumLengthMm} mm are not drawn.`,
    limits.mostBranches === null ? null : `More than ${limits.mostBranches} branches at one fork are shown as a finding.`,
  ].filter((line) => line !== null);
  return (
    <div class="rules-view">
      <h3>Where points are set</h3>
      <dl class="rule-list">
        {points.map(({ point, text, picture }) => (
          <div key={point}>
            <dt>{point}</dt>
            <dd>
              {text}
              {picture === null ? null : <StillPicture sha256={picture} read={readPicture} label={`Still picture: ${point}`} />}
            </dd>
          </div>
        ))}
      </dl>
      <h3>Labels</h3>
      {labels.length === 0 ? <p>No labels are asked for.</p> : null}
      <ul>
        {labels.map(({ label, on, values, required }) => (
          <li key={`${label} ${on}`}>
            <strong>{label}</strong> on {PLACES[on]}
            {values.length === 0 ? "" : `: ${values.join(", ")}`}
            {required ? "" : " (where it can be told)"}
          </li>
        ))}
      </ul>
      <h3>What is drawn</h3>
      {limitLines.length === 0 ? <p>Every string that the scan shows.</p> : null}
      <ul>
        {limitLines.map((line) => (
          <li key={line}>{line}</li>
        ))}
      </ul>
      {remarks === "" ? null : (
        <>
          <h3>Remarks</h3>
          <p class="rule-remarks">{remarks}</p>
        </>
      )}
    </div>
  );
}
