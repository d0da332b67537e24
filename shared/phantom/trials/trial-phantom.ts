import type { ChordaeFile, FileNode, FileStrand, FileTree, NodeLabels } from "#shared/formats/chordae/chordae-file.ts";
import { type PointMm, roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, scale } from "#shared/geometry/vec3.ts";
import { FileIds } from "#shared/phantom/grow-tree.ts";
import { type PhantomSpecimen, truthFile } from "#shared/phantom/phantom-specimen.ts";
import { PHANTOM_FACTS } from "#shared/phantom/scan-look.ts";
import { drawTrial, radiiOfString } from "#shared/phantom/trials/draw-trial.ts";
import { anySide } from "#shared/phantom/trials/string-shapes.ts";
import type { TrialSpec, TrialString } from "#shared/phantom/trials/trial-spec.ts";
import { TRIAL_VOLUMES, type TrialVolume } from "#shared/phantom/trials/trial-volumes.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { plainGrid, type VolumeGrid } from "#shared/volume/grid.ts";

/** Streams of random numbers of one seed: drawing has its own. */
const SHAPE_STREAM = 10;
const PIN_STREAM = 11;
/** A click lies at most this share of a radius beside the axis. */
const PIN_OFF_RADII = 0.25;

/** A trial volume made: its voxels, its true trees, and the pins of a person who clicks the nodes alone. */
export interface TrialPhantom {
  readonly volume: TrialVolume;
  readonly seed: number;
  readonly spec: TrialSpec;
  readonly grid: VolumeGrid;
  /** shape [nz, ny, nx], x fastest. */
  readonly voxels: Uint16Array;
  readonly truth: ChordaeFile;
  /** Where each node was clicked, by id: within a quarter of a radius. Millimetres. */
  readonly clicks: ReadonlyMap<string, PointMm>;
  readonly parameters: TraceParameters;
}

/** The trial volume of a name. @throws RangeError when there is none. */
export function trialNamed(name: string): TrialVolume {
  const found = TRIAL_VOLUMES.find((volume) => volume.name === name);
  if (!found) throw new RangeError(`one of ${TRIAL_VOLUMES.map((volume) => volume.name).join(", ")} expected, found ${name}`);
  return found;
}

/** Makes a trial volume; the same name and seed are the same bytes everywhere. */
export function trialPhantom(volume: TrialVolume, seed: number): TrialPhantom {
  const spec = volume.spec(new SeededRandom(seed, SHAPE_STREAM));
  const grid = plainGrid(spec.sizeVoxels, spec.spacingMm);
  const { blurFwhmMm, polarity } = spec.look;
  const facts = { name: `${volume.name}-${seed}`, grid, blurFwhmMm, facts: PHANTOM_FACTS, landmarks: {} };
  const trees = treesOf(spec.strings);
  const random = new SeededRandom(seed, PIN_STREAM);
  const clicks = new Map<string, PointMm>();
  for (const tree of trees)
    for (const node of tree.nodes) {
      const strand = tree.strands.find((each) => each.from === node.id || each.to === node.id)!;
      const radius = (strand.from === node.id ? strand.radii![0] : strand.radii!.at(-1)) ?? 0;
      const off = PIN_OFF_RADII * radius * Math.cbrt(random.unit());
      clicks.set(node.id, roundPoint(add(node.position, scale(anySide(random), off))));
    }
  return {
    volume,
    seed,
    spec,
    grid,
    voxels: drawTrial(spec, seed),
    truth: truthFile(facts, trees, []),
    clicks,
    parameters: { polarity, blurFwhmMm },
  };
}

/** The trial volume as a specimen, for whatever takes one in. */
export function trialSpecimen(made: TrialPhantom): PhantomSpecimen {
  const { grid, voxels, truth } = made;
  const plane = grid.size[0] * grid.size[1];
  return {
    name: `${made.volume.name}-${made.seed}`,
    grid,
    dtype: "uint16",
    renderSlab: (z0, z1, out) => out.set(voxels.subarray(z0 * plane, z1 * plane)),
    truth,
    crossings: [],
    facts: PHANTOM_FACTS,
    landmarks: {},
    blurFwhmMm: made.spec.look.blurFwhmMm,
  };
}

/** The trees that strings which share nodes make; a string whose first node no other string ends at begins a tree. */
function treesOf(strings: readonly TrialString[]): FileTree[] {
  const ids = new FileIds();
  const ends = new Set(strings.map((string) => string.to));
  return strings
    .filter((string) => !ends.has(string.from))
    .map((first, k) => {
      const id = ids.tree();
      const nodes: FileNode[] = [];
      const strands: FileStrand[] = [];
      const node = (at: Vec3, labels: NodeLabels): string => {
        const made = { id: ids.node(), ...labels, position: roundPoint(at) };
        nodes.push(made);
        return made.id;
      };
      const root = node(first.line[0]!, { kind: "origin", site: "scan-edge" });
      const grow = (string: TrialString, from: string): void => {
        const further = strings.filter((other) => other.from === string.to);
        const to = node(string.line.at(-1)!, { kind: further.length > 0 ? "fork" : "scan-edge" });
        const points = string.line.map(roundPoint);
        const radii = radiiOfString(string).map(roundMm);
        strands.push({ id: ids.strand(), from, to, points, radii });
        for (const other of further) grow(other, to);
      };
      for (const string of strings) if (string.from === first.from) grow(string, root);
      return { id, name: `trial-${k + 1}`, root, nodes, strands };
    });
}
