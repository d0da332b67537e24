import type { Assignment, StudyRecord } from "#shared/study/study-record.ts";
import { drawnOrder, secretCode, secretId, secretRandom } from "#shared/study/study-secrets.ts";
import { blindTurns, type Turn } from "#shared/study/turn.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/** Orders tried until repeats lie far enough apart. */
const TRIES = 500;

/**
 * All assignments of a study: those it has, unchanged, and for whatever is not drawn yet new ones with code, turn and place in
 * the annotator's order, all from the study's seed. Per annotator: the training round first, then round after round, each in
 * an order of its own; the same specimen never follows itself while there is another, and lies as far apart as half the
 * number of specimens where the draw allows. No two turns of one specimen are the same for one annotator (up to 22 passes).
 * @param gridOf the stored grid of a specimen, by its id.
 */
export function drawAssignments(study: StudyRecord, gridOf: (specimen: string) => VolumeGrid): Assignment[] {
  return study.annotators.flatMap(({ name }) => drawFor(study, name, gridOf));
}

function drawFor(study: StudyRecord, annotator: string, gridOf: (specimen: string) => VolumeGrid): Assignment[] {
  const { seed, specimens, passes } = study;
  const own = study.assignments.filter((one) => one.annotator === annotator).sort((a, b) => a.place - b.place);
  const known = new Set(own.map(({ specimen, pass }) => `${specimen} ${pass}`));
  const training = specimens.filter((one) => one.training).map(({ id }) => id);
  const counted = specimens.filter((one) => !one.training).map(({ id }) => id);
  const order = [
    ...drawnOrder(training, secretRandom(seed, "training order", annotator)).map((specimen) => ({ specimen, pass: 1 })),
    ...drawRounds(counted, passes, study.seed, annotator),
  ].filter(({ specimen, pass }) => !known.has(`${specimen} ${pass}`));
  const turns = new Map<string, Turn[]>();
  let place = own.reduce((most, one) => Math.max(most, one.place), 0);
  const drawn = order.map(({ specimen, pass }): Assignment => {
    const list =
      turns.get(specimen) ?? drawnOrder(blindTurns(gridOf(specimen)), secretRandom(seed, "turns", annotator, specimen));
    turns.set(specimen, list);
    place += 1;
    return {
      id: secretId(seed, annotator, specimen, pass),
      code: secretCode(seed, annotator, specimen, pass),
      annotator,
      specimen,
      pass,
      training: training.includes(specimen),
      place,
      turn: list[(pass - 1) % list.length]!,
      out: null,
      returned: null,
      setAside: [],
    };
  });
  return [...own, ...drawn];
}

/** Rounds over all specimens, one after the other; of many draws the first whose repeats lie far apart, else the best. */
function drawRounds(specimens: readonly string[], passes: number, seed: string, annotator: string) {
  const random = secretRandom(seed, "order", annotator);
  const enough = Math.ceil(specimens.length / 2);
  let best: { order: { specimen: string; pass: number }[]; apart: number } | null = null;
  for (let tried = 0; tried < TRIES; tried += 1) {
    const order = Array.from({ length: passes }, (_, round) =>
      drawnOrder(specimens, random).map((specimen) => ({ specimen, pass: round + 1 })),
    ).flat();
    const apart = leastApart(order.map(({ specimen }) => specimen));
    if (!best || apart > best.apart) best = { order, apart };
    if (apart >= enough) break;
  }
  return best?.order ?? [];
}

/** Smallest distance between two places of the same specimen; Infinity when none is repeated. */
function leastApart(order: readonly string[]): number {
  const last = new Map<string, number>();
  let least = Number.POSITIVE_INFINITY;
  order.forEach((specimen, k) => {
    const before = last.get(specimen);
    if (before !== undefined) least = Math.min(least, k - before);
    last.set(specimen, k);
  });
  return least;
}
