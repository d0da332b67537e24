import { readdir, stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { COMPARE_HELP, COMPARE_OPTIONS, compareOptionsOf } from "#main/cli/compare-options.ts";
import { realOption } from "#main/cli/number-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { type NamedTrees, refuseOtherFrame, scanWarnings } from "#main/cli/same-scan.ts";
import { runShared, SHARE_HELP, SHARE_OPTIONS, shareLines } from "#main/cli/shares.ts";
import type { SharedVerb, VerbCall, VerbResult } from "#main/cli/verb.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import type { CompareOptions } from "#shared/compare/comparison.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { CHORDAE_EXTENSION } from "#shared/formats/chordae/chordae-file.ts";
import { failedGates, type Gates } from "#shared/score/gates.ts";
import { type CandidateScore, scoreCandidate } from "#shared/score/score-candidate.ts";
import { scoreReport } from "#shared/score/score-report.ts";
import { scoreCsv, scoreText } from "#shared/score/score-table.ts";
import { trivialCandidate } from "#shared/score/trivial-candidate.ts";

/** What a score was asked for; the same in every share. */
interface ScoreHead {
  readonly reference: string;
  readonly limit: number;
  readonly gates: Gates;
  readonly options: CompareOptions;
}

/** `tautline score`: candidates against a reference, with gates for use in continuous integration. */
export const score: SharedVerb = {
  name: "score",
  summary: "a folder of candidate tree files against a reference; exit 1 when a gate fails",
  help: `tautline score DIR_OR_FILES... --reference R [options] [--json]

Scores each candidate tree file against the reference R. A reference tree is accepted when its edit distance (geometry
costs, origin held), over the cost of the reference tree, is below the limit; one that no tree matches fails.

  --reference R                the reference trees
  --annotator F                a pass by an annotator, scored the same way, for the report; may be repeated
  --limit x                    limit of the reference-normalised distance (0.6: common practice, no source)
  --least-accepted s           gate: share of reference trees that must be accepted (1)
  --least-recall s             gate: share of the reference's length found
  --least-precision s          gate: share of the candidate's length that is right
  --most-mean-distance mm      gate: mean distance of the centrelines
${COMPARE_HELP}
  --seconds s                  wall time for each candidate (60)
  --out report.html            a self-contained report with plots and pictures
  --csv table.csv              a row per candidate and reference tree
${SHARE_HELP}`,
  options: {
    reference: { type: "string" },
    annotator: { type: "string", multiple: true },
    limit: { type: "string" },
    "least-accepted": { type: "string" },
    "least-recall": { type: "string" },
    "least-precision": { type: "string" },
    "most-mean-distance": { type: "string" },
    seconds: { type: "string" },
    out: { type: "string" },
    csv: { type: "string" },
    ...COMPARE_OPTIONS,
    ...SHARE_OPTIONS,
  },
  positionals: [1, 10_000],

  async run(call) {
    const { options } = call;
    if (options.shard !== undefined && (options.out !== undefined || options.csv !== undefined)) {
      throw new TautlineError("misuse", "--out and --csv need all candidates: leave them out of a share.", {
        what: "--out with --shard",
      });
    }
    const result = await runShared(score, call);
    if (result.lines) return result;
    const { candidates } = result.json as { candidates: CandidateScore[] };
    if (typeof options.csv === "string") await writeText(options.csv, scoreCsv(candidates));
    if (typeof options.out === "string") await writeText(options.out, await reportOf(call, candidates, result));
    return result;
  },

  async share(call, share) {
    const { options, positionals, say } = call;
    const { head, reference, scoreOne } = await prepare(call);
    const candidates = await readCandidates(positionals);
    for (const other of candidates) refuseOtherFrame(reference, other);
    const item = (k: number) => {
      say(`scoring ${candidates[k]!.name} (${k + 1} of ${candidates.length})`);
      return scoreOne(candidates[k]!, realOption(options, "seconds", 60));
    };
    return shareLines("score", share, head, candidates.length, () => null, item);
  },

  gather({ head, items }) {
    const { limit, gates, reference } = head as ScoreHead;
    const scores = items as readonly CandidateScore[];
    const failures = scores.flatMap((one) => failedGates(one, gates));
    const passed = scores.length - new Set(failures.map((failure) => failure.candidate)).size;
    const summary = { reference, limit, candidates: scores.length, passed, failedGates: failures };
    const warnings = scores.flatMap((one) => one.warnings.map((warning) => `Warning: ${one.candidate}: ${warning}`));
    const notes = [...warnings, ...failures.map((failure) => failure.message)];
    return { json: { candidates: scores, summary }, text: scoreText(scores, limit), exit: failures.length > 0 ? 1 : 0, notes };
  },
};

async function prepare({ options }: VerbCall) {
  if (typeof options.reference !== "string") {
    throw new TautlineError(
      "misuse",
      "score needs --reference with the tree file to score against. 'tautline help score' shows its use.",
      { what: "no --reference" },
    );
  }
  const reference: NamedTrees = { name: nameOf(options.reference), file: await readTreeFile(options.reference) };
  const head: ScoreHead = {
    reference: reference.name,
    limit: realOption(options, "limit", 0.6),
    gates: {
      leastAccepted: realOption(options, "least-accepted", 1, 0, true),
      leastRecall: realOption(options, "least-recall", null, 0, true),
      leastPrecision: realOption(options, "least-precision", null, 0, true),
      mostMeanDistance: realOption(options, "most-mean-distance", null, 0, true),
    },
    options: compareOptionsOf(options, reference.file, { preset: "geometry", origin: "held" }),
  };
  const scoreOne = (other: NamedTrees, seconds: number): CandidateScore => {
    const end = performance.now() + 1000 * seconds;
    const found = scoreCandidate(other.name, reference.file, other.file, head.options, head.limit, () => end - performance.now());
    return { ...found, warnings: [...scanWarnings(reference, other), ...found.warnings] };
  };
  return { head, reference, scoreOne };
}

async function reportOf(call: VerbCall, scores: readonly CandidateScore[], result: VerbResult): Promise<string> {
  const { head, reference, scoreOne } = await prepare(call);
  const seconds = realOption(call.options, "seconds", 60);
  const annotators = await readCandidates((call.options.annotator as string[] | undefined) ?? []);
  for (const other of annotators) refuseOtherFrame(reference, other);
  const trivial = {
    name: "straight strands",
    file: { ...reference.file, trees: trivialCandidate(reference.file).trees },
  } as NamedTrees;
  const { failedGates: failures } = (result.json as { summary: { failedGates: { message: string }[] } }).summary;
  return scoreReport({
    referenceName: reference.name,
    reference: reference.file,
    limit: head.limit,
    tolerance: head.options.tolerance,
    scores,
    candidateTrees: new Map((await readCandidates(call.positionals)).map(({ name, file }) => [name, file])),
    annotators: annotators.map((other) => scoreOne(other, seconds)),
    trivial: scoreOne(trivial, seconds),
    gateFailures: failures.map((failure) => failure.message),
    software: "Tautline",
  });
}

/** The tree files named, and those in the folders named, in order of their names. @throws unreadable-input */
async function readCandidates(paths: readonly string[]): Promise<NamedTrees[]> {
  const files: string[] = [];
  for (const path of paths) {
    const found = await stat(path).catch(() => undefined);
    if (!found) throw unreadable(path, "a tree file or a folder of tree files", "nothing there", undefined, "Check the name.");
    if (!found.isDirectory()) files.push(path);
    else {
      const inside = (await readdir(path)).filter((name) => name.endsWith(CHORDAE_EXTENSION)).map((name) => join(path, name));
      if (inside.length === 0) throw unreadable(path, `files that end in ${CHORDAE_EXTENSION}`, "none in this folder");
      files.push(...inside);
    }
  }
  const unique = [...new Set(files)].sort((a, b) => (a < b ? -1 : 1));
  const names = unique.map(nameOf);
  return Promise.all(
    unique.map(async (path, k) => ({
      name: names.indexOf(names[k]!) === names.lastIndexOf(names[k]!) ? names[k]! : path,
      file: await readTreeFile(path),
    })),
  );
}

function writeText(path: string, text: string): Promise<void> {
  return writeWhole(diskFiles(), path, new TextEncoder().encode(text));
}

function nameOf(path: string): string {
  return basename(path, CHORDAE_EXTENSION);
}
