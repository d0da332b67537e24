import type { ReportOrder } from "#renderer/study/report/report-messages.ts";
import type { ReportContext } from "#shared/agreement/report/report-data.ts";
import type { AgreeOptions } from "#shared/agreement/study/agree.ts";
import type { StudyFile } from "#shared/agreement/study/study.ts";
import type { AnalysisAnswer, StudyView } from "#shared/api/study.ts";

/** A computed method's trees, to be held against the annotators. */
export interface MethodFiles {
  /** What the method is called in the report; no annotator's name. */
  readonly name: string;
  readonly files: readonly StudyFile[];
  /** The annotators worked with the engine that it uses. */
  readonly sameEngine: boolean;
}

/** Wall time for the edit distances of all pairs, as the command line has it. */
const BUDGET_MS = 60_000;
/** Of everything that is drawn, as the command line has it: the same passes give the same report. */
const SEED = 1;

const BLINDING: readonly string[] = [
  "An annotator's window showed a code in place of the specimen's name, no other pass, no annotator's name and no reference.",
  "Each assignment was shown turned by a rotation drawn for it, never mirrored, and was turned back when it was taken in.",
  "The order of assignments was drawn by lot for each annotator.",
];

/** What a study's report is made of. @param madeAt ISO 8601. @param method null = none is held against the annotators. */
export function reportOrder(
  view: StudyView,
  analysis: AnalysisAnswer,
  files: readonly StudyFile[],
  method: MethodFiles | null,
  software: ReportContext["software"],
  madeAt: string,
): ReportOrder {
  const methodFiles = method?.files.map(({ name, file }) => ({ name, file: { ...file, annotator: method.name, pass: 1 } }));
  return {
    files: [...files, ...(methodFiles ?? [])],
    options: optionsOf(view, method),
    context: contextOf(view, analysis, software, madeAt),
    notes: [...analysis.notes, ...leftOut(view, analysis), ...setAside(view), ...laterVersions(view)],
    budgetMs: BUDGET_MS,
  };
}

function optionsOf({ protocol }: StudyView, method: MethodFiles | null): AgreeOptions {
  const { analysis, drawing } = protocol.content;
  return {
    compare: {
      preset: "geometry",
      origin: "held",
      positionScale: analysis.positionScaleMm,
      merge: analysis.mergeMm,
      tolerance: analysis.toleranceMm,
      minimumDiameter: drawing.limits.minimumDiameterMm,
    },
    method: method?.name ?? null,
    margin: analysis.marginMm,
    sameEngine: method?.sameEngine ?? false,
    declinedByAll: 0,
    seed: SEED,
  };
}

function contextOf(
  view: StudyView,
  analysis: AnalysisAnswer,
  software: ReportContext["software"],
  madeAt: string,
): ReportContext {
  const { content, version, frozen } = view.protocol;
  const cells = new Map(view.assignments.map((cell) => [cell.id, cell]));
  const blinded = analysis.passes.every(({ assignment }) => (cells.get(assignment)?.out ?? null) !== null);
  return {
    title: view.name,
    software,
    madeAt,
    protocol: {
      id: view.id,
      version,
      sha256: frozen?.sha256 ?? null,
      frozen: frozen === null ? null : new Date(frozen.at).toISOString(),
      primaryQuantity: content.analysis.primary,
      minimumDiameterMm: content.drawing.limits.minimumDiameterMm,
      washoutDays: content.schedule.washoutDays,
      pointRules: content.drawing.points.map(({ point, text }) => `${point}: ${text}`),
    },
    // Only of passes that went out as packets can it be said.
    blinding: blinded && analysis.passes.length > 0 ? BLINDING : null,
    sampleSize: null,
    annotators: null,
    effort: analysis.passes.map(({ assignment, specimenName, annotator, pass, effort }) => ({
      specimen: specimenName,
      annotator,
      pass,
      secondsAtWork: effort.workMs / 1000,
      edits: effort.edits,
      undos: effort.undos,
      trees: cells.get(assignment)?.returned?.trees ?? effort.trees.length,
    })),
    idleSeconds: analysis.passes.reduce<number | null>(
      (most, { effort }) => Math.max(most ?? 0, effort.idleThresholdMs / 1000),
      null,
    ),
  };
}

function leftOut(view: StudyView, analysis: AnalysisAnswer): string[] {
  const names = new Map(view.specimens.map(({ id, name }) => [id, name]));
  const cells = new Map(view.assignments.map((cell) => [cell.id, cell]));
  return analysis.leftOut.flatMap(({ assignment, reason }) => {
    const cell = cells.get(assignment);
    // The training round is no part of the study's numbers, and no loss to them.
    if (cell === undefined || cell.training) return [];
    return [`${names.get(cell.specimen) ?? cell.specimen}, ${cell.annotator}, pass ${cell.pass} takes no part. ${reason}`];
  });
}

/** Returned passes that the lead set aside, with the lead's reasons. */
function setAside(view: StudyView): string[] {
  const names = new Map(view.specimens.map(({ id, name }) => [id, name]));
  return view.assignments.flatMap(({ specimen, annotator, pass, setAside: aside }) =>
    aside.map(
      ({ reason }) =>
        `${names.get(specimen) ?? specimen}, ${annotator}, pass ${pass}: a returned pass was set aside. Why: ${reason}`,
    ),
  );
}

/** Frozen versions of the protocol after the first, with their reasons. */
function laterVersions({ versions }: StudyView): string[] {
  return versions.flatMap(({ version, frozen, reason }) =>
    version > 1 && frozen !== null
      ? [`Version ${version} of the protocol was frozen on ${new Date(frozen.at).toISOString().slice(0, 10)}. Why: ${reason}`]
      : [],
  );
}

/** Names what a report is made of: another text means that something has changed since. */
export function madeFrom(view: StudyView, method: MethodFiles | null): string {
  const passes = view.assignments.flatMap(({ id, returned, counts }) =>
    returned !== null && counts?.yes ? [`${id} ${returned.head.hash}`] : [],
  );
  const { version, frozen } = view.protocol;
  return JSON.stringify([
    version,
    frozen?.sha256,
    passes,
    method?.name,
    method?.sameEngine,
    method?.files.map(({ name }) => name),
  ]);
}
