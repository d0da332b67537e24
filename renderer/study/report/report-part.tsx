import { useEffect, useState } from "preact/hooks";
import { offerDownload } from "#renderer/app/offer-download.ts";
import { plural } from "#renderer/shelf/words.ts";
import { FolderField, keepLastFolder, lastFolder } from "#renderer/study/parts/folder-field.tsx";
import { MethodChoice } from "#renderer/study/report/method-choice.tsx";
import type { MadeReport } from "#renderer/study/report/report-messages.ts";
import { madeFrom, reportOrder } from "#renderer/study/report/report-order.ts";
import type { ReportState } from "#renderer/study/report/report-run.ts";
import { ReportView } from "#renderer/study/report/report-view.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { AnalysisAnswer, StudyView } from "#shared/api/study.ts";

interface PartProps {
  readonly model: StudyModel;
  readonly view: StudyView;
}

/** The agreement report: what it would rest on, then the report itself, and ways to keep it. */
export function ReportPart({ model, view }: PartProps) {
  const { client } = model.services;
  const [analysis, setAnalysis] = useState<AnalysisAnswer | null>(null);
  const [failure, setFailure] = useState<string | null>(null);
  const method = model.method.value;
  const state = model.report.state.value;
  useEffect(() => {
    let current = true;
    client.studies
      .analysis(view.id)
      .then((answer) => current && setAnalysis(answer))
      .catch((error: unknown) => current && setFailure(error instanceof Error ? error.message : String(error)));
    return () => {
      current = false;
    };
  }, [client, view]);
  const annotators = view.annotators.map(({ name }) => name);
  const named = method === null || (method.name.trim() !== "" && !annotators.includes(method.name.trim()));
  const make = () =>
    model.report.start(
      async () => {
        const [answer, { files }, hello] = await Promise.all([
          client.studies.analysis(view.id),
          client.studies.passes(view.id),
          client.hello(),
        ]);
        const software = { name: hello.name, version: hello.version };
        return reportOrder(view, answer, files, method, software, new Date().toISOString());
      },
      madeFrom(view, method),
    );
  const canMake = analysis !== null && analysis.refusal === null;
  useEffect(() => {
    // Who opens this part wants the report; whoever stops it has it begun by hand again.
    if (canMake && !model.reportOpened) {
      model.reportOpened = true;
      void make();
    }
  }, [model, canMake]);
  if (failure !== null) {
    return (
      <p class="study-refusal" role="alert">
        {failure}
      </p>
    );
  }
  if (analysis === null) return <p class="soft">Reading what has come back</p>;
  const old = state.kind === "made" && state.from !== madeFrom(view, method);
  const going = state.kind === "reading" || state.kind === "running";
  return (
    <div class="report-part">
      <section class="pane study-part" aria-labelledby="rests-on">
        <h2 id="rests-on">Agreement report</h2>
        <RestsOn analysis={analysis} />
        <MethodChoice
          method={method}
          annotators={annotators}
          set={(next) => {
            model.method.value = next;
          }}
        />
        {old ? (
          <p class="warn" role="status">
            Something has changed since this report was made. Make it again.
          </p>
        ) : null}
        <div class="study-actions">
          <button
            type="button"
            class={state.kind === "made" && !old ? "button" : "button main"}
            disabled={analysis.refusal !== null || going || !named}
            onClick={() => void make()}
          >
            {state.kind === "made" ? "Make it again" : "Make the report"}
          </button>
          {state.kind === "made" ? <Keeping model={model} view={view} made={state.made} /> : null}
        </div>
        <Progress state={state} cancel={() => model.report.cancel()} />
      </section>
      {state.kind === "made" ? <ReportView report={state.made.report} /> : null}
    </div>
  );
}

function RestsOn({ analysis }: { readonly analysis: AnalysisAnswer }) {
  if (analysis.refusal !== null) {
    return (
      <>
        <p class="study-missing">{analysis.refusal}</p>
        <p class="soft">The report is made from frozen rules and passes that came back; it says so when something is missing.</p>
      </>
    );
  }
  return (
    <>
      <p>
        It rests on {plural(analysis.passes.length, "pass", "passes")} under version {analysis.protocol?.version} of the protocol.
      </p>
      <ul class="soft">
        {analysis.notes.map((note) => (
          <li key={note}>{note}</li>
        ))}
        <li>
          No annotator is the truth: numbers say how far annotators differ from each other and from themselves. What is settled
          from them is “a reference by N annotators”.
        </li>
      </ul>
    </>
  );
}

const STEPS = {
  sorting: "sorting the passes",
  pairs: "comparing two passes",
  statistics: "agreement and its intervals",
  report: "writing the report",
} as const;

function Progress({ state, cancel }: { readonly state: ReportState; readonly cancel: () => void }) {
  if (state.kind === "failed") {
    return (
      <p class="study-refusal" role="alert">
        The report could not be made. {state.message}
      </p>
    );
  }
  if (state.kind !== "reading" && state.kind !== "running") return null;
  const words =
    state.kind === "reading"
      ? "reading the passes"
      : `${STEPS[state.step]}${state.of > 1 ? `, ${state.done + 1} of ${state.of}` : ""}`;
  const share = state.kind === "running" && state.of > 1 ? { value: state.done, max: state.of } : {};
  return (
    <div class="job-line" role="status">
      <progress aria-label="Making the report" {...share} />
      <p class="soft">{words}</p>
      <button type="button" class="button" onClick={cancel}>
        Stop
      </button>
    </div>
  );
}

function Keeping({ model, view, made }: PartProps & { readonly made: MadeReport }) {
  const { notices, client, capabilities } = model.services;
  const [asking, setAsking] = useState(false);
  const [folder, setFolder] = useState(lastFolder());
  const stem = view.name.replace(/[^\p{L}\p{N}._-]+/gu, "-");
  const offer = (content: string, name: string, type: string) => {
    offerDownload(content, name, type);
    notices.news(`${name} is in your downloads.`);
  };
  const write = async () => {
    try {
      keepLastFolder(folder.trim());
      const { written } = await client.studies.exportPasses(view.id, folder.trim());
      notices.news(`${plural(written.length, "tree file")} written into ${folder.trim()}, for tautline agree.`);
      setAsking(false);
    } catch (error) {
      notices.failed(error);
    }
  };
  return (
    <>
      <button type="button" class="button" onClick={() => offer(made.html, `${stem}-agreement.html`, "text/html")}>
        Save as a page (.html)
      </button>
      <button type="button" class="button" onClick={() => offer(made.itemsCsv, `${stem}-items.csv`, "text/csv")}>
        Save the item table (.csv)
      </button>
      <button type="button" class="button" aria-expanded={asking} onClick={() => setAsking(!asking)}>
        Write the passes as tree files …
      </button>
      {asking ? (
        <form
          class="export-passes"
          onSubmit={(event) => {
            event.preventDefault();
            void write();
          }}
        >
          <FolderField
            label="Folder to write into; the same numbers come from it by tautline agree"
            value={folder}
            set={setFolder}
            capabilities={capabilities}
            disabled={false}
          />
          <button type="submit" class="button main" disabled={folder.trim() === ""}>
            Write
          </button>
        </form>
      ) : null}
    </>
  );
}
