import "#renderer/desk/desk.css";
import "#renderer/study/study.css";
import "#renderer/study/passes/passes.css";
import "#renderer/study/report/report.css";
import { useEffect, useState } from "preact/hooks";
import type { StudyPart } from "#renderer/app/place.ts";
import type { Services } from "#renderer/app/services.ts";
import { StudyModel } from "#renderer/study/study-model.ts";
import { StudyScreen } from "#renderer/study/study-screen.tsx";

export interface StudyProps {
  readonly services: Services;
  readonly study: string;
  readonly part: StudyPart;
}

/** A study's screen: reads it, and says why when that cannot be done. */
export function Study({ services, study, part }: StudyProps) {
  const [model] = useState(() => new StudyModel(services, study));
  useEffect(() => model.start(), [model]);
  const view = model.view.value;
  const failure = model.failure.value;
  if (view === null && failure !== null) {
    return (
      <main class="desk-waiting">
        <div class="pane desk-failure" role="alert">
          <h1>The study cannot be opened</h1>
          <p>{failure}</p>
          <div class="row">
            <button type="button" class="button" onClick={() => services.goTo({ screen: "shelf" })}>
              Back to the shelf
            </button>
            <button type="button" class="button main" onClick={() => void model.load()}>
              Try again
            </button>
          </div>
        </div>
      </main>
    );
  }
  if (view === null) return <main class="desk-waiting" aria-busy="true" aria-label="Reading the study" />;
  return <StudyScreen model={model} view={view} part={part} />;
}
