import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { TableOf, text } from "#shared/agreement/report/report-text.ts";
import { nodeTolerance } from "#shared/agreement/study/study.ts";
import { REPORT_CAUTIONS } from "#shared/report/html-page.ts";

/** For a reader who never saw the program: what was done, and what the words mean. */
export function aboutSection({ study, options, context }: ReportInput): ReportSection {
  const { tolerance, merge } = options.compare;
  const synthetic = study.specimens.some(({ passes }) => passes.some(({ file }) => file.synthetic === true));
  const blocks: ReportBlock[] = [text(REPORT_CAUTIONS, "caution")];
  if (synthetic)
    blocks.push(
      text("Synthetic: at least one of these specimens was made by a generator; no valve was scanned for it.", "caution"),
    );
  blocks.push(
    text(
      "Chordae tendineae are the cords that hold the leaflets of a heart valve. In a three-dimensional scan of an excised valve, annotators traced each cord by hand with a program that follows the image between the points they click. This report says how far such tracings by different annotators, and by the same annotator again, are alike.",
    ),
    text(
      "A tree is all that grows from one origin on a papillary muscle or the ventricular wall: strands that part at forks and run to ends, most of them insertions on a leaflet. A pass is one annotator's one go at one specimen. Each annotator's first pass over a specimen is compared with the others'; later passes are compared with the same annotator's earlier one only.",
      "quiet",
    ),
    text(
      `Nothing is taken as the truth. An item is a strand, or a node (origin, fork, end), as one or more passes have it: strands are one item when at least half of each lies within ${tolerance} mm of the other, nodes when they are of one type and at most ${nodeTolerance(tolerance)} mm apart; of all ways to sort the passes' strands into items, the one with the greatest total nearness is taken. Forks joined by less than ${merge} mm count as one fork. An item that a single pass has is an item, too.`,
      "quiet",
    ),
    text(
      "Numbers on matched items are conditional on the annotators having marked the item, and are titled so. The totals of each specimen, which misses enter, come first. All lengths are in millimetres.",
      "quiet",
    ),
  );
  const made = context.madeAt === null ? "" : `, ${context.madeAt.slice(0, 10)}`;
  blocks.push(text(`Made with ${context.software.name} ${context.software.version}${made}.`, "quiet"));
  return { id: "about", title: "What this is", blocks };
}

/** Which passes there are, under which protocol, and what has to be known of them. */
export function passesSection({ found, context }: ReportInput): ReportSection {
  const method = found.method?.method ?? null;
  const people = [...found.annotators, ...(method === null ? [] : [method])];
  const table = new TableOf("Passes by the day they were made", [
    { name: "specimen", words: true },
    ...people.map((name) => ({ name: name === method ? `${name} (a computed method)` : name, words: true })),
  ]);
  for (const specimen of new Set(found.passes.map((pass) => pass.specimen))) {
    const cells = people.map((name) => {
      const own = found.passes.filter((pass) => pass.specimen === specimen && pass.annotator === name);
      const days = own.map(
        ({ pass, created }) => `pass\u00a0${pass}:\u00a0${created?.slice(0, 10).replaceAll("-", "\u2011") ?? "day not said"}`,
      );
      return days.length === 0 ? "not done" : days.join("; ");
    });
    table.row(specimen, ...cells);
  }
  const blocks: ReportBlock[] = table.isEmpty ? [text("There is no pass.", "refusal")] : [table.table];
  const { protocol } = context;
  if (protocol) {
    const facts = [
      `Protocol ${protocol.id}, version ${protocol.version}${protocol.frozen ? `, frozen ${protocol.frozen.slice(0, 10)}, before the analysis` : ", not frozen before the analysis"}.`,
      `Primary quantity: ${protocol.primaryQuantity ?? "none was set; every number is descriptive"}.`,
      ...(protocol.minimumDiameterMm === null
        ? []
        : [`Strings thinner than ${protocol.minimumDiameterMm} mm were not to be traced.`]),
      ...(protocol.washoutDays === null ? [] : [`At least ${protocol.washoutDays} days between an annotator's passes.`]),
      ...protocol.pointRules,
      ...(protocol.sha256 === null ? [] : [`SHA-256 of the protocol: ${protocol.sha256}`]),
    ];
    blocks.push({ kind: "list", items: facts });
  } else blocks.push(text("These passes name no protocol: which rules the annotators followed is not part of this report."));
  if (found.notes.length > 0) blocks.push({ kind: "list", items: found.notes });
  return { id: "passes", title: "Passes and protocol", blocks };
}
