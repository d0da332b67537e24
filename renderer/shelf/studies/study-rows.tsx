import type { Services } from "#renderer/app/services.ts";
import { plural } from "#renderer/shelf/words.ts";
import type { StudySummary } from "#shared/api/study.ts";

export interface StudyRowsProps {
  readonly services: Services;
  readonly studies: readonly StudySummary[];
}

/** Studies that this library leads, a row each. */
export function StudyRows({ services, studies }: StudyRowsProps) {
  if (studies.length === 0) return null;
  return (
    <section class="shelf-group" aria-label="Studies">
      <ul class="shelf-rows">
        {studies.map((study) => (
          <li key={study.id} class="pane shelf-study" aria-labelledby={`study-${study.id}`}>
            <div>
              <h2 id={`study-${study.id}`}>
                {study.name} <span class="shelf-tag">study</span>
              </h2>
              <p>{planWords(study)}</p>
              <p class="soft">{standWords(study)}</p>
            </div>
            <div class="shelf-next">
              <button
                type="button"
                class="button"
                onClick={() => services.goTo({ screen: "study", study: study.id, part: "passes" })}
              >
                Open the study<span class="unseen"> {study.name}</span>
              </button>
              {study.counts.returned < 2 ? null : (
                <button
                  type="button"
                  class="button"
                  onClick={() => services.goTo({ screen: "study", study: study.id, part: "report" })}
                >
                  Report<span class="unseen"> of {study.name}</span>
                </button>
              )}
            </div>
          </li>
        ))}
      </ul>
    </section>
  );
}

/** "5 specimens × 3 annotators, 30 passes". */
function planWords({ specimens, annotators, counts }: StudySummary): string {
  return `${plural(specimens, "specimen")} × ${plural(annotators, "annotator")}, ${plural(counts.planned, "pass", "passes")}`;
}

/** "protocol version 1, frozen · 4 back, 2 out". */
function standWords({ protocol, counts }: StudySummary): string {
  const version = `protocol version ${protocol.version}, ${protocol.frozen ? "frozen" : "not frozen yet"}`;
  return `${version} · ${counts.returned} back, ${counts.out} out`;
}
