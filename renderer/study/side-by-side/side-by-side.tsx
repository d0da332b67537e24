import "#renderer/desk/desk.css";
import "#renderer/study/side-by-side/side-by-side.css";
import { useEffect, useState } from "preact/hooks";
import type { Services } from "#renderer/app/services.ts";
import { pageWorker } from "#renderer/study/side-by-side/compare-run.ts";
import { SideBySideModel } from "#renderer/study/side-by-side/side-by-side-model.ts";
import { SideBySideScreen } from "#renderer/study/side-by-side/side-by-side-screen.tsx";
import { openSides } from "#renderer/study/side-by-side/sides.ts";

export interface SideBySideProps {
  readonly services: Services;
  readonly specimen: string;
  readonly a: string;
  readonly b: string;
}

/** Two sets of one specimen side by side: reads both, and says why when that cannot be done. */
export function SideBySide({ services, specimen, a, b }: SideBySideProps) {
  const [model, setModel] = useState<SideBySideModel | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const [attempt, setAttempt] = useState(0);
  useEffect(() => {
    let opened: SideBySideModel | null = null;
    let gone = false;
    setFailure(null);
    openSides(services.client, specimen, a, b)
      .then((sides) => {
        if (gone) return;
        opened = new SideBySideModel(services, sides, pageWorker);
        setModel(opened);
      })
      .catch((error: unknown) => {
        if (!gone) setFailure(error instanceof Error ? error.message : String(error));
      });
    return () => {
      gone = true;
      opened?.dispose();
      setModel(null);
    };
  }, [services, specimen, a, b, attempt]);
  if (failure !== null) {
    return (
      <main class="desk-waiting">
        <div class="pane desk-failure" role="alert">
          <h1>These two cannot be shown side by side</h1>
          <p>{failure}</p>
          <div class="row">
            <button type="button" class="button" onClick={() => services.goTo({ screen: "shelf" })}>
              Back to the shelf
            </button>
            <button type="button" class="button main" onClick={() => setAttempt(attempt + 1)}>
              Try again
            </button>
          </div>
        </div>
      </main>
    );
  }
  if (model === null) return <main class="desk-waiting" aria-busy="true" aria-label="Reading both sides" />;
  return <SideBySideScreen model={model} />;
}
