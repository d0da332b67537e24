import type { Abilities, DemoStudyLog } from "#main/node/abilities.ts";
import type { Progress } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { NEW_PASS } from "#main/node/pass-file.ts";
import type { StudyStore } from "#main/node/study/study-store.ts";
import { isTautlineError } from "#shared/errors.ts";
import { DEMO_STUDY_NAMES, DEMO_STUDY_PASSES } from "#shared/phantom/demo-study.ts";
import { frozenStudy, newStudy, noted, type StudySpecimenFacts, withProtocol } from "#shared/study/edit-study.ts";
import { beginningProtocol, type ProtocolContent } from "#shared/study/protocol.ts";
import { factsOfLog } from "#shared/study/returned-log.ts";
import type { ReturnedPass, StudyRecord } from "#shared/study/study-record.ts";

/** Its id and seed are fixed: made again after a stop, it is the same study with the same passes. */
export const DEMO_STUDY_ID = "demo-study-harrow-bay";
const DEMO_STUDY_SEED = "07".repeat(32);
const ANNOTATORS = ["AN-1", "AN-2", "AN-3"] as const;

export interface PlantOptions {
  /** The library's folder. */
  readonly root: string;
  readonly library: Library;
  readonly store: StudyStore;
  readonly abilities: Pick<Abilities, "runDemoSpecimen" | "runDemoStudyLogs">;
  readonly newId: () => string;
  /** UTC milliseconds. */
  readonly now: () => number;
}

interface Hooks {
  readonly signal: AbortSignal;
  onProgress(progress: Progress): void;
}

/**
 * The demo study in the library: its specimens, its frozen protocol, and all passes as if they had been taken in. What is
 * there already stays; stopped anywhere, the next call completes it.
 * @param valve id of the demo valve's specimen. @returns the study's id. @throws disk-full, write-failed, cancelled
 */
export async function plantDemoStudy(options: PlantOptions, valve: string, hooks: Hooks): Promise<string> {
  const { store } = options;
  const specimens = await plantedSpecimens(options, valve, hooks);
  let study = await plannedStudy(options, specimens);
  if (study.assignments.every(({ returned }) => returned)) return study.id;
  hooks.onProgress(step(0.8, "Drawing the passes of three invented annotators"));
  const logs = await options.abilities.runDemoStudyLogs(hooks);
  for (const [k, assignment] of study.assignments.entries()) {
    hooks.signal.throwIfAborted();
    if (assignment.returned) continue;
    const specimen = study.specimens.find(({ id }) => id === assignment.specimen)!;
    const log = logs.find(
      (one) => one.specimen === specimen.name && one.annotator === assignment.annotator && one.pass === assignment.pass,
    )!;
    const returned = await plantedPass(options, study, assignment, log);
    study = await store.change(study.id, (current) => ({
      ...current,
      assignments: current.assignments.map((one) => (one.id === assignment.id ? { ...one, returned } : one)),
    }));
    hooks.onProgress(step(0.85 + (0.15 * (k + 1)) / study.assignments.length, "Taking the passes in"));
  }
  return study.id;
}

/** Ids of the study's specimens in the order of their names; those that are missing are made. */
async function plantedSpecimens(options: PlantOptions, valve: string, hooks: Hooks): Promise<string[]> {
  const { library, abilities, root, newId, now } = options;
  const [, ...blocks] = DEMO_STUDY_NAMES;
  const ids = [valve];
  for (const [k, name] of blocks.entries()) {
    const { specimens } = await library.shelf();
    const found = specimens.find(({ specimen }) => specimen.synthetic && specimen.name === name);
    const part = 0.8 / blocks.length;
    const onProgress = (progress: Progress) =>
      hooks.onProgress({
        ...progress,
        progress: part * (k + progress.progress),
        step: `${name}: ${progress.step}`,
        secondsLeft: null,
      });
    const order = { library: root, id: newId(), created: now(), name };
    ids.push(found?.specimen.id ?? (await abilities.runDemoSpecimen(order, { signal: hooks.signal, onProgress })).record.id);
  }
  return ids;
}

/** The study with its frozen protocol; begun anew when one of its specimens was removed since. */
async function plannedStudy(options: PlantOptions, specimens: readonly string[]): Promise<StudyRecord> {
  const { library, store, now } = options;
  const found = await store.read(DEMO_STUDY_ID).catch((error) => {
    if (isTautlineError(error, "not-found")) return null;
    throw error;
  });
  if (found && specimens.every((id) => found.specimens.some((one) => one.id === id))) return found;
  if (found) await store.remove(DEMO_STUDY_ID, () => undefined);
  const facts = new Map<string, StudySpecimenFacts>();
  for (const id of specimens) {
    const { name, volume } = await library.specimen(id);
    facts.set(id, { name, sha256: volume.sha256, grid: volume });
  }
  const factsOf = (id: string) => facts.get(id)!;
  const draft = {
    name: "Harrow Bay, synthetic",
    specimens,
    training: [],
    annotators: ANNOTATORS,
    passes: DEMO_STUDY_PASSES,
  };
  const made = newStudy(draft, factsOf, { id: DEMO_STUDY_ID, seed: DEMO_STUDY_SEED, now: now() });
  const frozen = frozenStudy(withProtocol(made, demoProtocol()), factsOf, now());
  const text = "Synthetic: specimens and passes are made by the program's generator; no packet went out.";
  const study = noted(frozen, { at: now(), what: "changed", text });
  await store.create(study);
  return study;
}

function demoProtocol(): ProtocolContent {
  const content = beginningProtocol();
  return {
    ...content,
    drawing: {
      ...content.drawing,
      labels: [...content.drawing.labels, { label: "segment", on: "insertion", values: [], required: true }],
      limits: { ...content.drawing.limits, minimumDiameterMm: 0.15 },
    },
    analysis: { ...content.analysis, primary: "path length", marginMm: 0.1 },
    schedule: { washoutDays: 28 },
  };
}

async function plantedPass(
  { library, now }: PlantOptions,
  study: StudyRecord,
  assignment: StudyRecord["assignments"][number],
  { records }: DemoStudyLog,
): Promise<ReturnedPass> {
  const { specimen, annotator, id: pass } = assignment;
  await library.passes.takeIn({ specimen, pass, annotator, records }, { ...NEW_PASS, synthetic: true, state: "finished" });
  const { head, document } = await library.passes.history(specimen, pass);
  return {
    at: now(),
    pass,
    head,
    protocolVersion: study.protocols[study.protocols.length - 1]!.version,
    ...factsOfLog(records, document),
    fingerprint: null,
  };
}

function step(progress: number, words: string): Progress {
  return { progress, step: words, bytesPerSecond: null, secondsLeft: null };
}
