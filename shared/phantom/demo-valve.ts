import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { pointMm, roundPoint } from "#shared/geometry/types.ts";
import { type HumanError, type HumanPass, humanPasses } from "#shared/phantom/human-passes.ts";
import { type PhantomSpecimen, truthFile } from "#shared/phantom/phantom-specimen.ts";
import { Plot } from "#shared/phantom/plant.ts";
import { scanOfSolids } from "#shared/phantom/render-scan.ts";
import { lookOf, PHANTOM_FACTS } from "#shared/phantom/scan-look.ts";
import { Solids } from "#shared/phantom/solids.ts";
import { addValveBody, annulusAt, HEADS, leafletAt } from "#shared/phantom/valve-shape.ts";
import { plantValve } from "#shared/phantom/valve-trees.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { Landmarks } from "#shared/trees/document.ts";
import { plainGrid, type VolumeGrid } from "#shared/volume/grid.ts";

/** The box that the valve stands in, millimetres. */
const BOX = { from: [-15, -13, 0], size: [30, 27.6, 34] } as const;
/** Voxels of the demo: coarse enough to be made and taken in within seconds; the generator makes finer ones as well. */
const DEMO_SPACING_MM = 0.1;
const DEMO_SEED = 7;
/** Name of the demo specimen. */
export const DEMO_VALVE_NAME = "HB-07";
/** Least gap between the surfaces of trees that are not meant to touch, millimetres. */
const GAP_MM = 0.25;

export interface DemoValve extends PhantomSpecimen {
  readonly passes: readonly HumanPass[];
  readonly errors: readonly HumanError[];
  /** One sentence for screens that show the specimen. */
  readonly note: string;
}

/**
 * The demo specimen HB-07 of the invented Harrow Bay collection with three annotators' passes. Synthetic: made by a seeded
 * generator, the same bytes every time.
 */
export function demoValve(): DemoValve {
  const specimen = valvePhantom({ name: DEMO_VALVE_NAME, seed: DEMO_SEED, spacingMm: DEMO_SPACING_MM, noise: 0.045 });
  const { passes, errors } = humanPasses(specimen, DEMO_SEED);
  return { ...specimen, passes, errors, note: "Synthetic valve made by the program's generator, voxels of 100 um." };
}

/** Trees of the whole valve. */
export const VALVE_TREES = 20;

/** Voxels of the smallest grid that holds the whole valve. */
export function valveSize(spacingMm: number): [number, number, number] {
  return BOX.size.map((length) => Math.ceil(length / spacingMm - 1e-9)) as [number, number, number];
}

/** True when a grid of this size holds the whole valve. */
export function holdsValve(size: readonly [number, number, number], spacingMm: number): boolean {
  return valveSize(spacingMm).every((least, axis) => size[axis]! >= least);
}

/**
 * A synthetic valve of some 20 trees at any voxel size. The same name, seed, spacing and noise give the same scan.
 * @param noise standard deviation as a share of a string's contrast. @param size voxels; by default those of the valve's box.
 * @param oneGrain one plane of noise for all slices, for scans of gigabytes.
 */
export function valvePhantom(options: {
  readonly name: string;
  readonly seed: number;
  readonly spacingMm: number;
  readonly noise: number;
  readonly size?: readonly [number, number, number];
  readonly oneGrain?: boolean;
}): PhantomSpecimen {
  const { name, seed, spacingMm, noise } = options;
  const random = new SeededRandom(seed);
  const grid = gridOf(spacingMm, options.size);
  const solids = new Solids();
  const plot = new Plot(solids, random, spacingMm, GAP_MM, 2, 2.6);
  addValveBody(solids, plot.clearance);
  const { crossing, crossLinks } = plantValve(plot, random, spacingMm);
  const blurFwhmMm = 1.7 * spacingMm;
  const about = { name, grid, blurFwhmMm, facts: PHANTOM_FACTS, landmarks: valveLandmarks() };
  return {
    ...about,
    dtype: "uint16",
    renderSlab: scanOfSolids(grid, solids.lists(), lookOf(seed, noise, blurFwhmMm, options.oneGrain)),
    truth: truthFile(about, plot.trees, crossLinks) as ChordaeFile,
    crossings: [crossing],
  };
}

function gridOf(spacingMm: number, size?: readonly [number, number, number]): VolumeGrid {
  const grid = plainGrid(size ?? valveSize(spacingMm), [spacingMm, spacingMm, spacingMm]);
  const origin = BOX.from.map((from, axis) => from + BOX.size[axis]! / 2 - ((grid.size[axis]! - 1) * spacingMm) / 2);
  return { ...grid, origin: roundPoint(pointMm(origin[0]!, origin[1]!, origin[2]!)) };
}

function valveLandmarks(): Landmarks {
  const turns = Array.from({ length: 24 }, (_, i) => (2 * Math.PI * i) / 24);
  const shares = Array.from({ length: 21 }, (_, i) => -1 + i / 10);
  return {
    annulus: { closed: true, points: turns.map((turn) => roundPoint(annulusAt(turn))) },
    freeEdges: (["anterior", "posterior"] as const).map((side) => shares.map((u) => roundPoint(leafletAt(side, u, 1)))),
    commissures: [roundPoint(leafletAt("anterior", 1, 0.7)), roundPoint(leafletAt("anterior", -1, 0.7))],
    muscleHeads: HEADS.map(({ muscle, head, centre, radius }) => ({
      muscle,
      head,
      position: roundPoint([centre[0], centre[1], centre[2] + radius]),
    })),
  };
}
