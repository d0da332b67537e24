import { basename } from "node:path";
import { COMPARE_HELP, COMPARE_OPTIONS } from "#main/cli/compare-options.ts";
import { realOption, wholeOption } from "#main/cli/number-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { itemsOf, runShared, SHARE_HELP, SHARE_OPTIONS, shareLines } from "#main/cli/shares.ts";
import type { SharedVerb, VerbCall } from "#main/cli/verb.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { ownVersion } from "#main/node/own-version.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import { agreementReport, contextOfFiles } from "#shared/agreement/report/agreement-report.ts";
import { renderReportHtml } from "#shared/agreement/report/render-html.ts";
import { type Agreement, type AgreeOptions, agreementFrame, assembleAgreement } from "#shared/agreement/study/agree.ts";
import { agreementText } from "#shared/agreement/study/agreement-text.ts";
import { itemsCsvOf } from "#shared/agreement/study/items-csv.ts";
import { comparePassPairs, type PairSummary, passPairs } from "#shared/agreement/study/pairwise.ts";
import { type StudyFile, studyOf } from "#shared/agreement/study/study.ts";
import { TautlineError } from "#shared/errors.ts";

/** `tautline agree`: how far annotators agree with each other and with themselves. */
export const agree: SharedVerb = {
  name: "agree",
  summary: "agreement between and within annotators over passes of one or more specimens",
  help: `tautline agree FILES... [options] [--json]

Agreement of all passes named: items that several annotators marked, totals per specimen, lengths, radii and angles, labels,
and what the same annotator did again. Specimen, annotator and pass are read from the files. What cannot be known is null
with its reason, and refused in words in the report. The order of the files changes nothing.

  --out report.html            a self-contained report with all numbers, plots and pictures, to read or print on A4
  --method A                   the annotator whose files are a computed method's; it is held against the others
  --margin mm                  margin of equivalence that the protocol set beforehand; without it there is no verdict
  --same-engine                the annotators worked with the engine that the method uses
  --declined-by-all n          candidates that every annotator was shown and declined (0)
  --seed n                     of everything that is drawn (1)
  --items items.csv            the item table in long form
${COMPARE_HELP}
  --seconds s                  wall time for the edit distances of all pairs (60)
${SHARE_HELP}`,
  options: {
    method: { type: "string" },
    margin: { type: "string" },
    "same-engine": { type: "boolean" },
    "declined-by-all": { type: "string" },
    seed: { type: "string" },
    out: { type: "string" },
    items: { type: "string" },
    seconds: { type: "string" },
    ...COMPARE_OPTIONS,
    ...SHARE_OPTIONS,
  },
  positionals: [1, 10_000],

  async run(call) {
    const { options, positionals } = call;
    if (options.shard !== undefined && (options.items !== undefined || options.out !== undefined))
      throw misuse("--out and --items need all passes: leave them out of a share.");
    const result = await runShared(agree, call);
    if (result.lines) return result;
    const { items, out } = options;
    if (typeof items !== "string" && typeof out !== "string") return result;
    const [files, asked] = [await readAll(positionals), agreeOptions(options)];
    const { tolerance, merge } = asked.compare;
    const study = studyOf(files, merge, asked.method);
    if (typeof items === "string") await writeText(items, itemsCsvOf(study, tolerance, merge));
    if (typeof out === "string") {
      const software = { name: "Tautline", version: ownVersion(import.meta.url) };
      const context = contextOfFiles(software, new Date().toISOString());
      const report = agreementReport({ study, options: asked, found: result.json as Agreement, context });
      await writeText(out, renderReportHtml(report));
    }
    return result;
  },

  async share({ positionals, options }, share) {
    const asked = agreeOptions(options);
    const seconds = realOption(options, "seconds", 60);
    const study = studyOf(await readAll(positionals), asked.compare.merge, asked.method);
    if (asked.method !== null && study.specimens.every((specimen) => specimen.method === null))
      throw misuse(`--method names ${asked.method}, but no file is by that annotator.`);
    const pairs = passPairs(study.specimens);
    const numbers = itemsOf(share, pairs.length);
    const begun = performance.now();
    const found = comparePassPairs(
      numbers.map((k) => pairs[k]!),
      asked.compare,
      () => seconds * 1000 - (performance.now() - begun),
    );
    const frame = () => agreementFrame(study, asked);
    return shareLines(
      "agree",
      share,
      { files: positionals, options: asked },
      pairs.length,
      frame,
      (k) => found[numbers.indexOf(k)],
    );
  },

  gather({ frame, items }) {
    const answer = assembleAgreement(frame as Omit<Agreement, "pairwise">, items as readonly PairSummary[]);
    return { json: answer, text: agreementText(answer), exit: 0, notes: answer.notes };
  },
};

function agreeOptions(options: VerbCall["options"]): AgreeOptions {
  return {
    compare: {
      preset: "geometry",
      origin: "held",
      positionScale: realOption(options, "position-scale", 2),
      merge: realOption(options, "merge", 0.3, 0, true),
      tolerance: realOption(options, "tolerance", 0.5),
      minimumDiameter: realOption(options, "minimum-diameter", null),
    },
    method: typeof options.method === "string" ? options.method : null,
    margin: realOption(options, "margin", null),
    sameEngine: options["same-engine"] === true,
    declinedByAll: wholeOption(options, "declined-by-all", 0) ?? 0,
    seed: wholeOption(options, "seed", 0) ?? 1,
  };
}

function writeText(path: string, text: string): Promise<void> {
  return writeWhole(diskFiles(), path, new TextEncoder().encode(text));
}

function readAll(paths: readonly string[]): Promise<StudyFile[]> {
  const all = [...new Set(paths)];
  const names = all.map((path) => basename(path));
  // A file goes by its name alone where no other has it: a report is no place for the folders of a computer.
  const nameOf = (path: string, k: number) => (names.indexOf(names[k]!) === names.lastIndexOf(names[k]!) ? names[k]! : path);
  return Promise.all(all.map(async (path, k) => ({ name: nameOf(path, k), file: await readTreeFile(path) })));
}

function misuse(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}
