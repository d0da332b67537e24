import type { StudyFile } from "#shared/agreement/study/study.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { DEMO_HABITS } from "#shared/phantom/annotator-habits.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { DEMO_VALVE_NAME, demoValve } from "#shared/phantom/demo-valve.ts";
import { type Chances, chancesOf, habitualPass, type StudyMistake } from "#shared/phantom/habitual-pass.ts";
import { PHANTOM_DATE, type PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";

/** Passes of each annotator over each specimen. */
export const DEMO_STUDY_PASSES = 2;
/** Days between the two passes over a specimen. */
export const DEMO_STUDY_WASHOUT_DAYS = 35;
const DEMO_STUDY_SEED = 7;
const DAY_MS = 86_400_000;
const BLOCK = { size: [192, 192, 128], spacingMm: 0.1, trees: 9, noise: 0.045 } as const;

/** One pass of the demo study. */
export interface DemoStudyPass {
  readonly specimen: string;
  readonly annotator: string;
  readonly pass: number;
  readonly file: ChordaeFile;
}

/** Five synthetic specimens of the invented Harrow Bay collection, and three invented annotators' two passes over each. */
export interface DemoStudy {
  readonly specimens: readonly PhantomSpecimen[];
  readonly passes: readonly DemoStudyPass[];
  readonly mistakes: readonly StudyMistake[];
  /** Where mistakes were possible, by the specimen's name. */
  readonly chances: ReadonlyMap<string, Chances>;
}

/** Seeds of the small specimens, by name. */
const BLOCK_SEEDS: ReadonlyMap<string, number> = new Map([
  ["HB-08", 8],
  ["HB-09", 9],
  ["HB-10", 10],
  ["HB-11", 11],
]);

/** Names of the demo study's specimens: HB-07 is the demo valve, the others are blocks cut out of such a valve. */
export const DEMO_STUDY_NAMES: readonly string[] = [DEMO_VALVE_NAME, ...BLOCK_SEEDS.keys()];

/** One of the small specimens; undefined for another name. */
export function demoBlock(name: string): PhantomSpecimen | undefined {
  const seed = BLOCK_SEEDS.get(name);
  return seed === undefined ? undefined : blockPhantom({ ...BLOCK, name, seed });
}

/** The specimens of the demo study, in the order of their names. */
export function demoStudySpecimens(): PhantomSpecimen[] {
  return [demoValve(), ...[...BLOCK_SEEDS.keys()].map((name) => demoBlock(name)!)];
}

/**
 * The demo study; its tree files carry no voxel hash yet. The same bytes every time. @param seed another seed is another
 * drawing of the same habits ({@link DEMO_HABITS}).
 */
export function demoStudy(seed = DEMO_STUDY_SEED): DemoStudy {
  const specimens = demoStudySpecimens();
  const passes: DemoStudyPass[] = [];
  const mistakes: StudyMistake[] = [];
  specimens.forEach((specimen, s) => {
    for (let pass = 1; pass <= DEMO_STUDY_PASSES; pass++)
      DEMO_HABITS.forEach((habits, k) => {
        const day = s + k + (pass - 1) * DEMO_STUDY_WASHOUT_DAYS;
        const created = new Date(Date.parse(PHANTOM_DATE) + day * DAY_MS).toISOString();
        const made = habitualPass(specimen, habits, k + 1, pass, created, 100 * seed + s);
        passes.push({ specimen: specimen.name, annotator: habits.annotator, pass, file: made.file });
        mistakes.push(...made.mistakes);
      });
  });
  return { specimens, passes, mistakes, chances: new Map(specimens.map((one) => [one.name, chancesOf(one)])) };
}

/** The demo study's passes as tree files under names of their own, such as `hb-07-an-1-pass-1.chordae.json`. */
export function demoStudyFiles(study: Pick<DemoStudy, "passes">): StudyFile[] {
  return study.passes.map(({ specimen, annotator, pass, file }) => ({
    name: `${specimen}-${annotator}-pass-${pass}.chordae.json`.toLowerCase(),
    file,
  }));
}
