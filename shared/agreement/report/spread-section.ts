import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, percent, TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { PlacedDistance, SpecimenSpread } from "#shared/agreement/report/spread.ts";
import { percentile } from "#shared/compare/overlap.ts";
import { spreadLegend, spreadPictures } from "#shared/report/spread-picture.ts";
import { lineChart } from "#shared/report/svg-plots.ts";

const PARTS = 10;
const LISTED = 10;

/** Where in space annotators differ: along strands, in pictures, and the places where they differ most. */
export function spreadSection({ study, options }: ReportInput, spreads: readonly SpecimenSpread[]): ReportSection {
  const title = "Where in space annotators differ";
  const strands = spreads.flatMap(({ strands: found }) => found);
  const distances = spreads.flatMap(({ distances: found }) => found);
  if (distances.length === 0) {
    const why = "No strand was drawn by two annotators: how far they run apart cannot be said.";
    return { id: "where", title, blocks: [text(why, "refusal")] };
  }
  const limits = [0.25, 0.5, 1].map((share) => share * options.compare.tolerance) as [number, number, number];
  const blocks: ReportBlock[] = [
    text(
      "At places 0.25 mm apart along each annotator's strand, the distance to the nearest place on another annotator's trees. Half way along a strand it says how differently the string was followed; towards an end also how much farther one of the two went on. It says nothing of a fork moved along its string, which the places of forks do. Given that both drew the strand.",
    ),
    profileFigure(distances),
  ];
  study.specimens.forEach(({ name }, s) => {
    const own = spreads[s]!.strands;
    if (own.length === 0) return;
    const lines = own.map(({ line, spreadMm, markedBy, of }) => ({ line, values: spreadMm, isPartial: markedBy < of }));
    const partial = own.filter(({ markedBy, of }) => markedBy < of).length;
    const missing =
      partial === 0
        ? "every strand was drawn by every annotator"
        : `${partial} of ${own.length} strands are not drawn by every annotator`;
    blocks.push({
      kind: "figure",
      svgs: [
        ...spreadPictures(`Strands of ${name} by how far annotators run apart`, lines, limits),
        spreadLegend(limits, "mm", "dashed: not drawn by every annotator"),
      ],
      caption: `${name}: each strand as the first annotator who has it drew it, from the front and turned by 50 degrees about the upright. The wider and darker, the farther apart (root mean square of the distances there); ${missing}.`,
    });
  });
  const worst = strands
    .filter(({ spreadMm }) => spreadMm.length > 0)
    .map((strand) => {
      const at = strand.spreadMm.reduce((best, value, k) => (value > strand.spreadMm[best]! ? k : best), 0);
      return { ...strand, at, most: strand.spreadMm[at]! };
    })
    .sort((a, b) => b.most - a.most)
    .slice(0, LISTED);
  const table = new TableOf(`The ${worst.length} strands with the greatest distance between annotators`, [
    { name: "specimen", words: true },
    { name: "tree", words: true },
    "distance there (mm)",
    "share of the way from the origin's side",
    "place x, y, z (mm)",
    "drawn by",
  ]);
  for (const { specimen, tree, most, at, line, markedBy, of } of worst)
    table.row(
      specimen,
      tree,
      fixed(most, 2),
      percent(at / (line.length - 1)),
      line[at]!.map((value) => fixed(value, 1)).join(", "),
      `${markedBy} of ${of}`,
    );
  blocks.push(table.table);
  return { id: "where", title, blocks };
}

function profileFigure(distances: readonly PlacedDistance[]): ReportBlock {
  const parts = Array.from({ length: PARTS }, (_, part) =>
    Float64Array.from(
      distances
        .filter(({ share }) => Math.min(PARTS - 1, Math.floor(share * PARTS)) === part)
        .map(({ distanceMm }) => distanceMm),
    ).sort(),
  );
  const at = (p: number) => parts.map((values) => (values.length === 0 ? null : percentile(values, p)));
  const lines = [
    { name: "95th percentile", values: at(0.95) },
    { name: "75th percentile", values: at(0.75) },
    { name: "median", values: at(0.5) },
  ];
  const most = Math.max(...lines.flatMap(({ values }) => values.map((value) => value ?? 0)), 0.05);
  const middle = Array.from({ length: PARTS }, (_, k) => Number(((k + 0.5) / PARTS).toFixed(2)));
  return {
    kind: "figure",
    svgs: [
      lineChart(
        "Distance between annotators along strands",
        middle,
        lines,
        "share of the way from the origin's side (0) to the end's side (1)",
        "distance (mm)",
        [0, Math.ceil(most * 20) / 20],
      ),
    ],
    caption: `Distance between two annotators' lines along strands, all strands and pairs of annotators together (${distances.length} places).`,
  };
}
