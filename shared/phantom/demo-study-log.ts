import type { ChordaeFile, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { readChain } from "#shared/log/chain.ts";
import { PassHistory, type Stamp } from "#shared/log/history.ts";
import type { LogRecord } from "#shared/log/records.ts";
import { DEMO_PACE } from "#shared/phantom/annotator-habits.ts";
import type { DemoStudyPass } from "#shared/phantom/demo-study.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";

/** How long an invented annotator looks at a tree that is not right before it is taken back, milliseconds. */
const REGRET_MS = 6000;

/**
 * A log as an annotator of known pace would have left it: tree after tree, some of them taken back and drawn again, one
 * session that ends when the file says it was made. The pass's and specimen's ids in its header are for whoever takes it in to
 * replace. Trees that a cross-link joins come together.
 */
export function demoPassLog({ annotator, specimen, pass, file }: DemoStudyPass, seed: number): LogRecord[] {
  const { secondsPerTree, takenBack } = DEMO_PACE[annotator]!;
  const random = new SeededRandom(seed, 5000);
  const gaps: number[] = [];
  const groups = treesTogether(file);
  const acts = groups.map((trees) => {
    const work = trees.length * secondsPerTree * 1000 * random.between(0.8, 1.2);
    const isTakenBack = random.unit() < takenBack;
    gaps.push(work, ...(isTakenBack ? [REGRET_MS, work / 2] : []));
    return { trees, work, isTakenBack };
  });
  const ended = Date.parse(file.created!);
  const begun = ended - Math.round(gaps.reduce((sum, gap) => sum + gap, 0));
  let mono = 0;
  const at = (after: number): Stamp => {
    mono += Math.round(after);
    return { t: begun + mono, mono, session: `demo-${annotator.toLowerCase()}-${pass}` };
  };
  const header = { pass: "demo", specimen: specimen.toLowerCase(), annotator, number: pass, epoch: `demo${seed}` };
  const { history, lines } = PassHistory.begin(header, at(0));
  lines.push(...history.session("opened", at(0)));
  for (const { trees, work, isTakenBack } of acts) {
    const draw = (after: number) => {
      const incoming = documentFromFile({ ...file, trees, crossLinks: linksAmong(file, trees) });
      const { operation, curves } = takeInTrees(history.document, history.ids(), { incoming });
      lines.push(
        ...history.commit(operation, `Synthetic: ${trees.map(({ id, name }) => name ?? id).join(", ")}`, curves, at(after)),
      );
    };
    draw(work);
    if (!isTakenBack) continue;
    lines.push(...history.undo(at(REGRET_MS)));
    draw(work / 2);
  }
  lines.push(...history.session("closed", at(0)));
  return readChain(lines, undefined, "the demo pass").map(({ record }) => record);
}

/** Trees one by one, but those that cross-links join in one group. */
function treesTogether(file: ChordaeFile): FileTree[][] {
  const groups = file.trees.map((tree) => [tree]);
  for (const { from, to } of file.crossLinks ?? []) {
    const [a, b] = [from, to].map((id) =>
      groups.find((group) => group.some(({ nodes }) => nodes.some((node) => node.id === id))),
    );
    if (!a || !b || a === b) continue;
    a.push(...b.splice(0));
  }
  return groups.filter((group) => group.length > 0);
}

function linksAmong(file: ChordaeFile, trees: readonly FileTree[]) {
  const ids = new Set(trees.flatMap(({ nodes }) => nodes.map(({ id }) => id)));
  return (file.crossLinks ?? []).filter(({ from, to }) => ids.has(from) && ids.has(to));
}
