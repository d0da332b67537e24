import "#renderer/shelf/shelf.css";
import "#renderer/shelf/studies/study-rows.css";
import "#renderer/study/study.css";
import { useEffect, useState } from "preact/hooks";
import { AboutSheet } from "#renderer/app/about-sheet.tsx";
import type { Services } from "#renderer/app/services.ts";
import { setTheme, theme } from "#renderer/app/theme-choice.ts";
import { toldJobs } from "#renderer/app/told-jobs.ts";
import type { Client } from "#renderer/client/client.ts";
import { AddScanSheet } from "#renderer/shelf/add-scan/add-scan-sheet.tsx";
import { FirstSteps } from "#renderer/shelf/first-steps.tsx";
import { JobCard } from "#renderer/shelf/job-card.tsx";
import { ShelfModel } from "#renderer/shelf/shelf-model.ts";
import { SpecimenRow } from "#renderer/shelf/specimen-row.tsx";
import { AssignmentRows } from "#renderer/shelf/studies/assignment-rows.tsx";
import { StudyRows } from "#renderer/shelf/studies/study-rows.tsx";
import { countsWords } from "#renderer/shelf/words.ts";
import { NewStudySheet } from "#renderer/study/make/new-study-sheet.tsx";
import { TakeInSheet } from "#renderer/study/packets/take-in-sheet.tsx";

export interface ShelfProps {
  readonly services: Services;
  /** The assignment that is being handed back; null = none. */
  readonly handBack: string | null;
}

const STEPS_KEY = "tautline-first-steps";

/** One model a window, also while another screen is shown: a job that fails meanwhile must still be told. */
const models = new WeakMap<Client, ShelfModel>();

function modelOf({ client, notices }: Services): ShelfModel {
  let model = models.get(client);
  if (model === undefined) {
    model = new ShelfModel(client, notices);
    model.start();
    models.set(client, model);
  }
  return model;
}

/** The start screen: specimens of the library with their passes, and the ways to add a scan. */
export function Shelf({ services, handBack }: ShelfProps) {
  const { client, capabilities, notices } = services;
  const model = modelOf(services);
  useEffect(() => {
    void model.load();
    return () => model.forgetMade();
  }, [model]);
  const madeStudy = model.madeStudy.value;
  useEffect(() => {
    if (madeStudy !== null) services.goTo({ screen: "study", study: madeStudy, part: "report" });
  }, [services, madeStudy]);
  const [adding, setAdding] = useState<{ readonly path: string } | null>(null);
  const [about, setAbout] = useState(false);
  const [asking, setAsking] = useState<"packet" | "study" | null>(null);
  const [steps, setSteps] = useState(() => localStorage.getItem(STEPS_KEY) !== "put away");
  const [over, setOver] = useState(false);
  const answer = model.answer.value;
  const studies = model.studies.value;
  // An assignment stands in a row of its own, under its code.
  const taken = new Set(studies?.assignments.map(({ specimen }) => specimen));
  const specimens = answer?.specimens.filter(({ specimen }) => !taken.has(specimen.id)) ?? [];
  const told = toldJobs.value;
  const problems = [...(answer?.problems ?? []), ...(studies?.problems ?? [])];
  const jobs = model.jobs.value.filter(({ id, state }) => (state === "running" || state === "failed") && !told.has(id));
  const things = (answer?.specimens.length ?? 0) + (studies?.studies.length ?? 0) + taken.size;
  const isEmpty = answer !== null && things === 0 && jobs.length === 0;
  const demoStudyRuns = jobs.some(({ what, state }) => what === "demo-study" && state === "running");
  const demoRuns = jobs.some(({ what, state }) => what === "demo" && state === "running");

  const drop = (event: DragEvent) => {
    setOver(false);
    const file = event.dataTransfer?.files[0];
    if (file === undefined) return;
    event.preventDefault();
    const path = capabilities.pathOfDropped(file);
    if (path !== null) setAdding({ path });
    else {
      notices.news(`A browser does not tell where '${file.name}' lies. Type or choose its path.`);
      setAdding({ path: "" });
    }
  };

  return (
    <main
      class={over ? "shelf dropping" : "shelf"}
      aria-label="Shelf"
      onDragOver={(event) => {
        if (!event.dataTransfer?.types.includes("Files")) return;
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={(event) => event.currentTarget === event.target && setOver(false)}
      onDrop={drop}
    >
      <header class="shelf-head">
        <h1>Tautline</h1>
        <p class="soft">{answer === null ? "" : countsWords(specimens.length, studies?.studies.length ?? 0, taken.size)}</p>
        <div class="shelf-actions">
          <button type="button" class="button main" onClick={() => setAdding({ path: "" })}>
            Add a scan
          </button>
          <button type="button" class="button" onClick={() => setAsking("packet")}>
            Take in a packet
          </button>
          <button type="button" class="button" onClick={() => setAsking("study")}>
            New study
          </button>
          <button type="button" class="button" disabled={demoRuns} onClick={() => void model.openDemo()}>
            Open the demo valve
          </button>
          <button type="button" class="button" disabled={demoStudyRuns} onClick={() => void model.openDemoStudy()}>
            Open the demo study
          </button>
          <button type="button" class="button plain" onClick={() => setTheme(theme.value === "dark" ? "light" : "dark")}>
            {theme.value === "dark" ? "Light theme" : "Dark theme"}
          </button>
          <button type="button" class="button plain" onClick={() => setAbout(true)}>
            About
          </button>
        </div>
      </header>
      <div class="shelf-body">
        {steps ? (
          <FirstSteps
            putAway={() => {
              localStorage.setItem(STEPS_KEY, "put away");
              setSteps(false);
            }}
          />
        ) : null}
        <div aria-live="polite">
          {jobs.map((job) => (
            <JobCard key={job.id} job={job} model={model} />
          ))}
        </div>
        {model.failure.value === null ? null : (
          <div class="shelf-job failed" role="alert">
            <div>
              <h3>The library could not be read</h3>
              <p>{model.failure.value}</p>
            </div>
            <button type="button" class="button" onClick={() => void model.load()}>
              Try again
            </button>
          </div>
        )}
        {answer === null && model.failure.value === null ? <p class="soft shelf-wait">Reading the library …</p> : null}
        {isEmpty ? (
          <section class="shelf-empty" aria-label="Nothing here yet">
            <h2>The shelf is empty</h2>
            <div>
              <button type="button" class="button main" onClick={() => setAdding({ path: "" })}>
                Add a scan from this computer
              </button>
              <button type="button" class="button" onClick={() => void model.openDemo()}>
                Open the demo valve, no file needed
              </button>
              <button type="button" class="button" onClick={() => setAsking("packet")}>
                Take in a packet of a study
              </button>
            </div>
            <p class="soft">
              {capabilities.shell === "electron"
                ? "A scan can also be dropped anywhere on this page."
                : "Scans are read from this computer's disk and never leave it."}
            </p>
          </section>
        ) : null}
        {studies === null ? null : (
          <AssignmentRows
            handBack={handBack}
            services={services}
            assignments={studies.assignments}
            shelf={answer?.specimens ?? []}
          />
        )}
        {studies === null ? null : <StudyRows services={services} studies={studies.studies} />}
        <ul class="shelf-rows" aria-label="Specimens">
          {specimens.map((shown) => (
            <SpecimenRow
              key={shown.specimen.id}
              shown={shown}
              services={services}
              fresh={model.made.value === shown.specimen.id}
              reload={() => model.load()}
            />
          ))}
        </ul>
        {problems.length > 0 ? (
          <section class="shelf-problems" aria-label="What could not be read">
            <h3>In the library folder, but not readable</h3>
            <ul>
              {problems.map((problem) => (
                <li key={problem}>{problem}</li>
              ))}
            </ul>
          </section>
        ) : null}
      </div>
      {adding === null ? null : (
        <AddScanSheet
          client={client}
          capabilities={capabilities}
          path={adding.path}
          close={() => setAdding(null)}
          begun={(job) => {
            model.begun(job);
            setAdding(null);
          }}
        />
      )}
      {asking === "packet" ? <TakeInSheet services={services} close={() => setAsking(null)} /> : null}
      {asking === "study" ? (
        <NewStudySheet
          services={services}
          specimens={specimens.filter(({ incomplete }) => !incomplete).map(({ specimen }) => specimen)}
          close={() => setAsking(null)}
        />
      ) : null}
      {about ? <AboutSheet client={client} close={() => setAbout(false)} /> : null}
    </main>
  );
}
