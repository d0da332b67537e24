import { RulesView } from "#renderer/study/protocol/rules-view.tsx";
import type { ProtocolContent } from "#shared/study/protocol.ts";

export interface FrozenProtocolProps {
  readonly content: ProtocolContent;
  readonly readPicture: (sha256: string) => Promise<Blob>;
}

/** A frozen version, to be read: what annotators draw by, and what the numbers are. */
export function FrozenProtocol({ content: { drawing, analysis, schedule }, readPicture }: FrozenProtocolProps) {
  const severities = Object.entries(drawing.limits.severities);
  const rows: readonly (readonly [string, string])[] = [
    ["Primary quantity", analysis.primary ?? "none"],
    ["Matching tolerance", `${analysis.toleranceMm} mm for strands, ${2 * analysis.toleranceMm} mm for nodes`],
    ["Forks count as one below", `${analysis.mergeMm} mm`],
    ["Displacement as dear as an insertion", `${analysis.positionScaleMm} mm`],
    ["Margin", analysis.marginMm === null ? "none: no verdict on a method" : `${analysis.marginMm} mm`],
    ["Days between repeats", String(schedule.washoutDays)],
    ...severities.map(([code, severity]) => [`Findings of ${code}`, severity === "off" ? "not reported" : severity] as const),
  ];
  return (
    <div class="frozen-protocol">
      <RulesView rules={drawing} readPicture={readPicture} />
      <div>
        <h3>What the numbers are</h3>
        <dl class="facts protocol-facts">
          {rows.map(([name, value]) => (
            <div key={name}>
              <dt>{name}</dt>
              <dd>{value}</dd>
            </div>
          ))}
        </dl>
      </div>
    </div>
  );
}
