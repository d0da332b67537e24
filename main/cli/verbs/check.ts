import { readTreeFile } from "#main/cli/read-tree-file.ts";
import type { Verb } from "#main/cli/verb.ts";
import { structureFindings } from "#shared/checks/structure.ts";

/** `tautline check`: what is wrong or doubtful in a tree file. */
export const check: Verb = {
  name: "check",
  summary: "findings on the structure of a tree file; exit 1 when one is an error",
  help: `tautline check T [--json]

Reports what is wrong or doubtful in the structure of the trees, each finding with its code, weight, place and a plain
sentence. Exit 1 when a finding is an error.

  errors    no-root not-connected loop open-end
  warnings  no-points two-strand-fork short-spur overlapping-strands shared-stretch`,
  options: {},
  positionals: [1, 1],
  async run({ positionals }) {
    const findings = structureFindings(await readTreeFile(positionals[0]!));
    const errors = findings.filter((finding) => finding.severity === "error").length;
    const lines = findings.map((finding) => {
      const place = finding.at.position ? ` (at ${finding.at.position.map((x) => x.toFixed(2)).join(", ")} mm)` : "";
      return `${finding.severity.padEnd(7)} ${finding.code.padEnd(19)} ${finding.message}${place}`;
    });
    const count = `${findings.length} finding${findings.length === 1 ? "" : "s"}, ${errors} of them error${errors === 1 ? "" : "s"}.`;
    return { json: { findings }, text: [...lines, count].join("\n"), exit: errors > 0 ? 1 : 0 };
  },
};
