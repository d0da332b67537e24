import { CAUTIONS } from "#renderer/app/about-sheet.tsx";
import type { StudyPart } from "#renderer/app/place.ts";
import { setTheme, theme } from "#renderer/app/theme-choice.ts";
import { plural } from "#renderer/shelf/words.ts";
import { EffortPart } from "#renderer/study/effort/effort-part.tsx";
import { Tabs } from "#renderer/study/parts/tabs.tsx";
import { progressOf } from "#renderer/study/passes/grid.ts";
import { PassesPart } from "#renderer/study/passes/passes-part.tsx";
import { PlanningPanel } from "#renderer/study/planning/planning-panel.tsx";
import { ProtocolPart } from "#renderer/study/protocol/protocol-part.tsx";
import { ReportPart } from "#renderer/study/report/report-part.tsx";
import type { StudyModel } from "#renderer/study/study-model.ts";
import type { StudyView } from "#shared/api/study.ts";

interface ShownStudy {
  readonly model: StudyModel;
  readonly view: StudyView;
}

const TABS: readonly { readonly name: StudyPart; readonly label: string }[] = [
  { name: "passes", label: "Passes" },
  { name: "protocol", label: "Protocol" },
  { name: "planning", label: "Planning" },
  { name: "effort", label: "Effort" },
  { name: "report", label: "Report" },
];

/** The whole screen of a study: where one is, how it stands, and one of its parts. */
export function StudyScreen({ model, view, part }: ShownStudy & { readonly part: StudyPart }) {
  const { services } = model;
  return (
    <div class="study-screen">
      <StudyHead model={model} view={view} />
      <Tabs
        label="Parts of the study"
        tabs={TABS}
        now={part}
        panel="study-panel"
        choose={(name) => services.goTo({ screen: "study", study: view.id, part: name })}
      />
      {model.failure.value === null ? null : (
        <div class="banner warn-banner" role="alert">
          The study could not be read again, so this may be old: {model.failure.value}
        </div>
      )}
      <main class="study-main">
        <div id="study-panel" class="study-body" role="tabpanel" aria-labelledby={`tab-${part}`} tabIndex={0}>
          <Part model={model} view={view} part={part} />
          <p class="soft study-cautions">{CAUTIONS.join(" ")}</p>
        </div>
      </main>
    </div>
  );
}

function Part({ model, view, part }: ShownStudy & { readonly part: StudyPart }) {
  switch (part) {
    case "passes":
      return <PassesPart model={model} view={view} />;
    case "protocol":
      return <ProtocolPart key={view.protocol.version} model={model} view={view} />;
    case "planning":
      return <PlanningPanel annotators={view.annotators.length} />;
    case "effort":
      return <EffortPart view={view} />;
    case "report":
      return <ReportPart model={model} view={view} />;
  }
}

function StudyHead({ model, view }: ShownStudy) {
  const { back, planned } = progressOf(view);
  const counted = view.specimens.filter(({ training }) => !training).length;
  const { version, frozen } = view.protocol;
  return (
    <header class="head-line">
      <nav aria-label="Where you are" class="crumbs">
        <button type="button" class="button plain" onClick={() => model.services.goTo({ screen: "shelf" })}>
          shelf
        </button>
        <span aria-hidden="true">/</span>
        <span>study</span>
        <span aria-hidden="true">/</span>
        <h1>{view.name}</h1>
      </nav>
      <p class="counts">
        {plural(counted, "specimen")} × {plural(view.annotators.length, "annotator")} × {plural(view.passes, "pass", "passes")} ·
        protocol {version}, {frozen === null ? <span class="warn">not frozen</span> : "frozen"} ·{" "}
        <span class="figures">
          {back} of {planned}
        </span>{" "}
        back
      </p>
      <div class="head-tools">
        <button type="button" class="button" onClick={() => setTheme(theme.value === "dark" ? "light" : "dark")}>
          {theme.value === "dark" ? "light" : "dark"}
        </button>
      </div>
    </header>
  );
}
