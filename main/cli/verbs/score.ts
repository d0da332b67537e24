import { readdir, stat } from "node:fs/promises";
import { basename, join } from "node:path";
import { realOption } from "#main/cli/number-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { type NamedTrees, refuseOtherFrame, scanWarnings } from "#main/cli/same-scan.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import type { CompareOptions } from "#shared/compare/comparison.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { CHORDAE_EXTENSION, type ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { failedGates, type Gates } from "#shared/score/gates.ts";
import { type CandidateScore, scoreCandidate } from "#shared/score/score-candidate.ts";
import { scoreReport } from "#shared/score/score-report.ts";
import { scoreCsv, scoreText } from "#shared/score/score-table.ts";
import { trivialCandidate } from "#shared/score/trivial-candidate.ts";

/** `tautline score`: candidates against a reference, with gates for use in continuous integration. */
export const score: Verb = {
  name: "score",
  summary: "a folder of candidate tree files against a reference; exit 1 when a gate fails",
  help: `tautline score DIR_OR_FILES... --reference R [options] [--json]

Scores each candidate tree file against the reference R. A reference tree is accepted when its edit distance (geometry
costs, origin held), over the cost of the reference tree, is below the limit; one that no tree matches fails.

  --reference R             the reference trees
  --annotator F             a pass by an annotator, scored the same way, for comparison; may be repeated
  --limit x                 limit of the reference-normalised distance (0.6: common practice, no source)
  --least-accepted s        gate: share of reference trees that must be accepted (1)
  --least-recall s          gate: share of the reference's length found
  --least-precision s       gate: share of the candidate's length that is right
  --most-mean-distance mm   gate: mean distance of the centrelines
  --tolerance mm, --merge mm, --position-scale mm, --minimum-diameter mm   as in 'tautline compare'
  --seconds s               wall time for each candidate (60)
  --out report.html         a self-contained report with plots and pictures
  --csv table.csv           a row per candidate and reference tree`,
  options: {
    reference: { type: "string" },
    annotator: { type: "string", multiple: true },
    limit: { type: "string" },
    "least-accepted": { type: "string" },
    "least-recall": { type: "string" },
    "least-precision": { type: "string" },
    "most-mean-distance": { type: "string" },
    tolerance: { type: "string" },
    merge: { type: "string" },
    "position-scale": { type: "string" },
    "minimum-diameter": { type: "string" },
    seconds: { type: "string" },
    out: { type: "string" },
    csv: { type: "string" },
  },
  positionals: [1, 10_000],
  async run({ positionals, options, io, say }) {
    if (typeof options.reference !== "string") {
      throw new TautlineError(
        "misuse",
        "score needs --reference with the tree file to score against. 'tautline help score' shows its use.",
        { what: "no --reference" },
      );
    }
    const limit = realOption(options, "limit", 0.6);
    const seconds = realOption(options, "seconds", 60);
    const files = diskFiles();
    const gates: Gates = {
      leastAccepted: realOption(options, "least-accepted", 1, 0, true),
      leastRecall: realOption(options, "least-recall", null, 0, true),
      leastPrecision: realOption(options, "least-precision", null, 0, true),
      mostMeanDistance: realOption(options, "most-mean-distance", null, 0, true),
    };
    const reference: NamedTrees = { name: nameOf(options.reference), file: await readTreeFile(options.reference) };
    const compareOptions = compareOptionsOf(options, reference.file);
    const candidates = await readCandidates(positionals);
    const annotators = await Promise.all(
      ((options.annotator as string[] | undefined) ?? []).map(async (path) => ({
        name: nameOf(path),
        file: await readTreeFile(path),
      })),
    );
    for (const other of [...candidates, ...annotators]) refuseOtherFrame(reference, other);
    const scoreOne = (other: NamedTrees): CandidateScore => {
      if (io.signal.aborted) throw new TautlineError("cancelled", "Interrupted.", { what: "score" });
      const end = performance.now() + 1000 * seconds;
      const found = scoreCandidate(other.name, reference.file, other.file, compareOptions, limit, () =>
        io.signal.aborted ? 0 : end - performance.now(),
      );
      return { ...found, warnings: [...scanWarnings(reference, other), ...found.warnings] };
    };
    const scores = candidates.map((candidate, k) => {
      say(`scoring ${candidate.name} (${k + 1} of ${candidates.length})`);
      return scoreOne(candidate);
    });
    const failures = scores.flatMap((one) => failedGates(one, gates));
    for (const one of scores) for (const warning of one.warnings) say(`Warning: ${one.candidate}: ${warning}`);
    for (const failure of failures) say(failure.message);
    if (typeof options.csv === "string") await writeWhole(files, options.csv, utf8(scoreCsv(scores)));
    if (typeof options.out === "string") {
      const report = scoreReport({
        referenceName: reference.name,
        reference: reference.file,
        limit,
        tolerance: compareOptions.tolerance,
        scores,
        candidateTrees: new Map(candidates.map(({ name, file }) => [name, file])),
        annotators: annotators.map(scoreOne),
        trivial: scoreCandidate(
          "straight strands",
          reference.file,
          trivialCandidate(reference.file),
          compareOptions,
          limit,
          () => 1000 * seconds,
        ),
        gateFailures: failures.map((failure) => failure.message),
        software: "Tautline",
      });
      await writeWhole(files, options.out, utf8(report));
    }
    const failing = new Set(failures.map((failure) => failure.candidate));
    const summary = {
      reference: reference.name,
      limit,
      candidates: scores.length,
      passed: scores.length - failing.size,
      failedGates: failures,
    };
    return { json: { candidates: scores, summary }, text: scoreText(scores, limit), exit: failures.length > 0 ? 1 : 0 };
  },
};

/** Sampling step where the reference names no volume, millimetres. */
const STEP_WITHOUT_VOLUME_MM = 0.02;

function compareOptionsOf(options: VerbCall["options"], reference: ChordaeFile): CompareOptions {
  const spacing = reference.volume?.spacing;
  return {
    preset: "geometry",
    origin: "held",
    positionScale: realOption(options, "position-scale", 2),
    merge: realOption(options, "merge", 0.3, 0, true),
    tolerance: realOption(options, "tolerance", 0.5),
    minimumDiameter: realOption(options, "minimum-diameter", null),
    step: spacing ? Math.min(...spacing) / 2 : STEP_WITHOUT_VOLUME_MM,
  };
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

function utf8(text: string): Uint8Array {
  return new TextEncoder().encode(text);
}

function nameOf(path: string): string {
  return basename(path, CHORDAE_EXTENSION);
}
