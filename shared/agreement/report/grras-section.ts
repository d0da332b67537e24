import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { FileSpecimen } from "#shared/formats/chordae/chordae-file.ts";

type Status = "filled" | "in part" | "for the authors";

/**
 * The items of the guideline for reporting reliability and agreement, in own words: what this report fills in, and what only
 * the authors can. @source Kottner et al., J Clin Epidemiol 2011;64:96-106 (its items from memory)
 */
export function grrasSection(input: ReportInput): ReportSection {
  const { study, found, context, options } = input;
  const { annotators, specimens } = study;
  const table = new TableOf("What to report of a study of reliability and agreement", [
    "item",
    { name: "asks for", words: true },
    { name: "state", words: true },
    { name: "what can be said here", words: true },
  ]);
  let number = 0;
  const row = (asks: string, status: Status, words: string) => {
    number += 1;
    table.row(String(number), asks, status, words);
  };
  const protocol = context.protocol;
  const counts = `${specimens.length} specimens, ${annotators.length} annotators (${annotators.join(", ") || "none"}), ${found.passes.filter(({ role }) => role !== "method").length} passes, ${found.intra.length} repeats`;
  const days = found.intra.flatMap(({ days: apart }) => (apart === null ? [] : [apart]));
  const apart = days.length === 0 ? "days between repeats are not known" : daysBetween(days);
  row(
    "Title and summary name reliability or agreement",
    "for the authors",
    "A paper's title and summary are not part of this report.",
  );
  row(
    "The instrument that is judged",
    "filled",
    `Trees of chordae tendineae traced by hand along the image with ${context.software.name} ${context.software.version}; lengths, radii, angles, places and labels.`,
  );
  row(
    "The population of subjects",
    facts(input) === "" ? "for the authors" : "in part",
    facts(input) || "The files say nothing of the specimens; say which valves, from where.",
  );
  row(
    "The population of annotators",
    context.annotators ? "filled" : "for the authors",
    context.annotators?.join(" ") ?? "Say what they are trained for and whom they stand for.",
  );
  row("What is known already, and why the study", "for the authors", "Say it in the paper.");
  row(
    "How the numbers of subjects, annotators and repeats were chosen",
    context.sampleSize ? "filled" : "in part",
    `${context.sampleSize ?? "How they were chosen is not recorded."} There are ${counts}.`,
  );
  row("How subjects and annotators were sampled", "for the authors", "Say whether they were drawn, or taken as they came.");
  row(
    "How measuring was done, blinding and time between included",
    context.blinding ? "filled" : "in part",
    `${protocol ? `By protocol ${protocol.id}, version ${protocol.version}. ` : "No protocol is named. "}${context.blinding?.join(" ") ?? "Blinding is not recorded in these passes."} ${apart[0]!.toUpperCase()}${apart.slice(1)}.`,
  );
  row(
    "Whether annotators worked independently",
    context.blinding ? "filled" : "for the authors",
    context.blinding ? "Each annotator's window showed no other pass and no names." : "These files do not say it.",
  );
  row(
    "The statistics",
    "filled",
    `See Methods; matching tolerance ${options.compare.tolerance} mm, results at three tolerances, clustering by specimen.`,
  );
  row("How many subjects, annotators and repeats there were in the end", "filled", `${counts}. See Passes and protocol.`);
  row(
    "What subjects and annotators were like",
    facts(input) === "" ? "for the authors" : "in part",
    `Totals of each specimen are given. ${facts(input)}`.trim(),
  );
  row(
    "Estimates with their uncertainty",
    specimens.length >= 5 ? "filled" : "in part",
    specimens.length >= 5
      ? "Given with intervals over specimens."
      : "Given; intervals for new specimens are refused, since there are too few specimens.",
  );
  row("What the results mean in practice", "for the authors", "Say which differences would matter for the use of the trees.");
  row("Detailed results for others", "filled", "Every pass, every pair and the item table (items.csv) go with this report.");
  return {
    id: "grras",
    title: "Reporting guideline (GRRAS)",
    blocks: [
      text(
        "The 15 items of the guideline in our own words; where it says “for the authors”, this report cannot fill the item.",
        "quiet",
      ),
      table.table,
    ],
  };
}

function daysBetween(days: readonly number[]): string {
  const [least, most] = [Math.round(Math.min(...days)), Math.round(Math.max(...days))];
  return `${least === most ? least : `${least} to ${most}`} days between repeats`;
}

/** What the files say of the specimens; empty when nothing. */
function facts({ study }: ReportInput): string {
  const of = (key: keyof FileSpecimen) => [
    ...new Set(
      study.specimens.flatMap(({ passes }) =>
        passes.flatMap(({ file }) => {
          const value = file.specimen?.[key];
          return value === undefined || value === null || value === "" ? [] : [String(value)];
        }),
      ),
    ),
  ];
  const parts = [
    ["species", of("species"), ""],
    ["fixation", of("fixation"), ""],
    ["medium", of("medium"), ""],
    ["pressure", of("pressure"), " mmHg"],
    ["state", of("state"), ""],
  ] as const;
  const said = parts.flatMap(([name, values, unit]) => (values.length === 0 ? [] : [`${name} ${values.join(", ")}${unit}`]));
  return said.length === 0 ? "" : `From the files: ${said.join("; ")}.`;
}
