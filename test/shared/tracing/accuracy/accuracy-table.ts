// The accuracy that tracing is held to, row by row, from solved trial volumes. The limits are what was asked of the program; the truth
// is analytic (see measure-trial.ts).

import { trialPhantom } from "#shared/phantom/trials/trial-phantom.ts";
import type { TrialTopic, TrialVolume } from "#shared/phantom/trials/trial-volumes.ts";
import { forkErrors } from "#test/shared/tracing/accuracy/measure-forks.ts";
import { measureTrial, quantile, type StrandAccuracy } from "#test/shared/tracing/accuracy/measure-trial.ts";

/** What the volumes of one kind reached together. */
export interface VolumeAccuracy {
  readonly volume: TrialVolume;
  readonly seeds: readonly number[];
  readonly strands: readonly StrandAccuracy[];
  /** Distance of each fork's proposed place from the true one, local diameters. */
  readonly forks: readonly number[];
}

/** One line of the table. */
export interface AccuracyRow {
  readonly what: string;
  readonly limit: string;
  readonly reached: string;
  readonly holds: boolean;
}

/** Makes and solves a kind of trial volume at some seeds. */
export function measureVolume(volume: TrialVolume, seeds: readonly number[]): VolumeAccuracy {
  const strands: StrandAccuracy[] = [];
  const forks: number[] = [];
  for (const seed of seeds) {
    const made = trialPhantom(volume, seed);
    strands.push(...measureTrial(made).strands);
    if (volume.topic === "fork") forks.push(...forkErrors(made));
  }
  return { volume, seeds, strands, forks };
}

/** The volumes of some topics. */
function volumesOf(all: readonly VolumeAccuracy[], ...topics: TrialTopic[]): VolumeAccuracy[] {
  return all.filter(({ volume }) => topics.includes(volume.topic));
}

const centre = (of: readonly VolumeAccuracy[]) => of.flatMap(({ strands }) => strands.flatMap((strand) => strand.centreErrors));
const shareOf = ({ strands }: VolumeAccuracy, count: (strand: StrandAccuracy) => number) =>
  strands.reduce((sum, strand) => sum + count(strand), 0) / strands.reduce((sum, strand) => sum + strand.points, 0);

/** The rows that every run is held to; one per requirement, and where strings differ in kind one per kind. */
export function accuracyRows(all: readonly VolumeAccuracy[]): AccuracyRow[] {
  const rows: AccuracyRow[] = [];
  const most = (what: string, value: number, limit: number, unit: string, digits = 2) =>
    rows.push({ what, limit: `${limit} ${unit}`, reached: `${value.toFixed(digits)} ${unit}`, holds: value <= limit });
  const least = (what: string, share: number) =>
    rows.push({ what, limit: "95 %", reached: `${(100 * share).toFixed(1)} %`, holds: share >= 0.95 });
  const clear = volumesOf(all, "plain", "fork", "touching");
  most("centreline, median", quantile(centre(clear), 0.5), 0.25, "voxel");
  most("centreline, 95th percentile", quantile(centre(clear), 0.95), 0.75, "voxel");
  const worst = (share: number) => Math.max(...clear.map((one) => quantile(centre([one]), share)));
  most("centreline, median, worst kind of volume", worst(0.5), 0.25, "voxel");
  most("centreline, 95th percentile, worst kind of volume", worst(0.95), 0.75, "voxel");
  const lengths = clear.flatMap(({ strands }) => strands.map((strand) => strand.lengthError));
  most("length of a strand, median", 100 * quantile(lengths, 0.5), 2, "%");
  for (const [what, of] of [
    ["radius, median", clear],
    ["radius of flattened strings, median", clear.filter(({ volume }) => volume.name === "flattened")],
    ["radius of strings that touch, median", volumesOf(all, "touching")],
    ["radius with a bright rim, median", volumesOf(all, "rim")],
  ] as const)
    most(
      what,
      100 *
        quantile(
          of.flatMap(({ strands }) => strands.flatMap((strand) => strand.radiusErrors)),
          0.5,
        ),
      5,
      "%",
      1,
    );
  for (const one of volumesOf(all, "below-resolution"))
    least(
      "below resolution: no radius",
      shareOf(one, (strand) => strand.withoutRadius),
    );
  for (const one of volumesOf(all, "touching"))
    least(
      `on its string: ${one.volume.name}`,
      shareOf(one, (strand) => strand.onString),
    );
  for (const one of volumesOf(all, "low-contrast", "thick", "rim"))
    most(`centreline, median: ${one.volume.name}`, quantile(centre([one]), 0.5), 0.5, "voxel");
  most(
    "fork from its true place, farthest",
    Math.max(...volumesOf(all, "fork").flatMap(({ forks }) => forks)),
    1,
    "local diameter",
  );
  return rows;
}

/** The table as lines of text. */
export function tableLines(all: readonly VolumeAccuracy[]): string[] {
  const number = (value: number, digits: number) => (Number.isFinite(value) ? value.toFixed(digits) : "-").padStart(7);
  return [
    "volume             strands  median    95 %  length  radius  on string  no radius",
    ...all.map((one) => {
      const lengths = one.strands.map((strand) => strand.lengthError);
      const radii = one.strands.flatMap((strand) => strand.radiusErrors);
      return [
        `${one.volume.name}${one.volume.hard ? " (hard)" : ""}`.padEnd(24),
        String(one.strands.length).padStart(2),
        number(quantile(centre([one]), 0.5), 2),
        number(quantile(centre([one]), 0.95), 2),
        number(100 * quantile(lengths, 0.5), 2),
        number(100 * quantile(radii, 0.5), 1),
        number(100 * shareOf(one, (strand) => strand.onString), 1),
        number(100 * shareOf(one, (strand) => strand.withoutRadius), 1),
      ].join(" ");
    }),
    "",
    ...accuracyRows(all).map(
      ({ what, limit, reached, holds }) =>
        `${holds ? "reached" : "MISSED "} ${what.padEnd(50)} ${reached.padEnd(20)} limit ${limit}`,
    ),
  ];
}

/** Seeds for each kind of volume: more where a string may be left for another, one where a volume is large. */
export function seedsFor(volume: TrialVolume, first: number): number[] {
  const count = volume.name === "strut-10" ? 1 : volume.topic === "touching" ? 3 : 2;
  return Array.from({ length: count }, (_, k) => first + k);
}
