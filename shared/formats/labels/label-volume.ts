import { Gzip } from "fflate";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { type ChordaeFile, type FileLine, frameOf } from "#shared/formats/chordae/chordae-file.ts";
import { coverLine, type LabelLine, lineOf } from "#shared/formats/labels/cover-line.ts";
import { IDENTITY3, pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { nrrdHeaderText } from "#shared/volume/nrrd/write-nrrd-header.ts";

/** What a voxel's number stands for: the trees, or the strands, of a file in their order, from 1; 0 is nothing. */
export type LabelsOf = "trees" | "strands";

export interface LabelVolume {
  readonly grid: VolumeGrid;
  /** Id of each number, from 1. */
  readonly ids: readonly string[];
  /** Fills `out`, shape [z1 - z0, ny, nx], x fastest, with the slices [z0, z1). */
  readonly renderSlab: (z0: number, z1: number, out: Uint16Array) => void;
}

/** A number has 16 bits. */
const MOST_LABELS = 65535;

/**
 * The tubes of a file's strands on the grid of their scan, at the measured radii; a strand is at least the voxels its
 * centreline runs through. Where tubes overlap a voxel belongs to the one into which it lies deepest.
 * @throws unreadable-input when the file does not say the scan's size and voxel size; misuse for more items than 16 bits count.
 */
export function labelVolume(file: ChordaeFile, of: LabelsOf, fileName: string): LabelVolume {
  const grid = gridOfFile(file, fileName);
  const places = new Map(file.trees.flatMap((tree) => tree.nodes.map((node) => [node.id, node.position] as const)));
  const ids =
    of === "trees" ? file.trees.map((tree) => tree.id) : file.trees.flatMap((tree) => tree.strands.map((strand) => strand.id));
  if (ids.length > MOST_LABELS) {
    const what = `A label volume counts up to ${MOST_LABELS} ${of}, found ${ids.length}.`;
    throw new TautlineError("misuse", what, { what });
  }
  const numbers = new Map(ids.map((id, i) => [id, i + 1]));
  const lines: LabelLine[] = [];
  for (const tree of file.trees)
    for (const strand of tree.strands)
      lines.push(
        lineOf(
          courseOf(strand, places),
          strand.points ? strand.radii : undefined,
          numbers.get(of === "trees" ? tree.id : strand.id)!,
          grid,
        ),
      );
  const [nx, ny] = grid.size;
  const depth = new Float32Array(nx * ny);
  return {
    grid,
    ids,
    renderSlab: (z0, z1, out) => {
      out.fill(0);
      for (let z = z0; z < z1; z++) {
        depth.fill(Number.POSITIVE_INFINITY);
        const plane = out.subarray((z - z0) * nx * ny, (z - z0 + 1) * nx * ny);
        for (const line of lines) if (z >= line.firstPlane && z <= line.lastPlane) coverLine(line, grid, z, plane, depth);
      }
    },
  };
}

/**
 * The label volume as an NRRD file with gzip, chunk by chunk. The header names what each number stands for; the same file
 * gives the same bytes.
 */
export function* labelNrrd(labels: LabelVolume): Generator<Uint8Array> {
  const { grid, ids, renderSlab } = labels;
  const [nx, ny, nz] = grid.size;
  const names = ids.map((id, i) => `${i + 1}: ${id}`);
  yield new TextEncoder().encode(nrrdHeaderText(grid, "uint16", "gzip", ["Labels by Tautline. Research use only.", ...names]));
  const packed: Uint8Array[] = [];
  const gzip = new Gzip({ level: 6, mtime: 0 }, (chunk) => void packed.push(chunk));
  const slab = Math.max(1, Math.floor((4 << 20) / (2 * nx * ny)));
  for (let z = 0; z < nz; z += slab) {
    const planes = Math.min(slab, nz - z);
    // The packer keeps a view of what it was given, so every slab gets an array of its own.
    const values = new Uint16Array(nx * ny * planes);
    renderSlab(z, z + planes, values);
    gzip.push(new Uint8Array(values.buffer), z + planes === nz);
    yield* packed.splice(0);
  }
}

/** What a label volume does not keep of this file, one sentence each. */
export function labelLosses(file: ChordaeFile): string[] {
  const lines = file.trees.flatMap((tree) => tree.strands);
  const losses = [
    "A label volume keeps only which voxels belong to which tree or strand; nodes, labels and centrelines are not kept.",
  ];
  if (lines.some((line) => line.points && (!line.radii || line.radii.includes(null))))
    losses.push("Where a radius is below resolution or was not measured, the string is one voxel wide.");
  if (lines.some((line) => !line.points))
    losses.push("Strands that are not traced are drawn straight through their pins, one voxel wide.");
  if (file.crossLinks?.length) losses.push("Cross-links belong to no tree and are left out.");
  return losses;
}

/** The scan's grid as a file gives it. @throws unreadable-input */
export function gridOfFile(file: ChordaeFile, fileName: string): VolumeGrid {
  const { size, spacing, origin, direction } = file.volume ?? {};
  if (!size || !spacing) {
    const expected = "the scan's size and voxel size in `volume`, which a label volume needs";
    throw unreadable(fileName, expected, "none", "volume", "Export the trees from their specimen, or add the scan's grid.");
  }
  return {
    size: sizeXyz(...size),
    spacing: spacingMm(...spacing),
    origin: origin ? pointMm(...origin) : pointMm(0, 0, 0),
    direction: direction ?? IDENTITY3,
    frame: frameOf(file),
  };
}

function courseOf(line: FileLine, places: ReadonlyMap<string, Vec3>): readonly Vec3[] {
  return line.points ?? [places.get(line.from)!, ...(line.via ?? []), places.get(line.to)!];
}
