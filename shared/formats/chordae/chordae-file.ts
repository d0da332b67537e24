import type { Matrix3, Vec3 } from "#shared/geometry/types.ts";
import type { Certainty, Leaflet, LegKind, MadeBy, Muscle, NodeKind, OriginSite, Segment, Zone } from "#shared/trees/document.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";
import type { FrameName } from "#shared/volume/grid.ts";

/** Name in a tree file's `format`. */
export const CHORDAE_FORMAT = "chordae-trees";
/** Newest version of the tree file that this program writes and reads. */
export const CHORDAE_VERSION = 1;
/** How names of tree files end. */
export const CHORDAE_EXTENSION = ".chordae.json";

/** A key this version does not know may stand on every object of the file; it survives reading and writing. */
interface Open {
  readonly [unknownKey: string]: unknown;
}

/** The scan that a file's trees lie in. Spacing, origin in millimetres; sha256 of the stored array. */
export interface FileVolume extends Open {
  readonly name?: string;
  readonly sha256?: string | null;
  readonly dtype?: SourceDtype;
  readonly size?: Vec3;
  readonly spacing?: Vec3;
  readonly origin?: Vec3;
  readonly direction?: Matrix3;
  readonly handedness?: "confirmed" | "unknown";
  readonly blurFwhm?: number | null;
  readonly derivedFrom?: FileDerivation;
}

/** The whole scan that a crop or bin was made from; crop x0, y0, z0, x1, y1, z1 in its voxels, x0 in, x1 out. */
export interface FileDerivation extends Open {
  readonly sha256?: string | null;
  readonly crop?: readonly number[];
  readonly bin?: number;
}

export interface FileSpecimen extends Open {
  readonly species?: string | null;
  readonly fixation?: string | null;
  readonly medium?: string | null;
  /** mmHg */
  readonly pressure?: number | null;
  readonly state?: string | null;
}

/** What a node is, beside its id and place. */
export interface NodeLabels {
  readonly kind: NodeKind;
  readonly certainty?: Certainty;
  readonly site?: OriginSite;
  readonly muscle?: Muscle;
  readonly head?: number;
  readonly leaflet?: Leaflet;
  readonly segment?: Segment;
  readonly zone?: Zone;
  readonly cleft?: boolean;
}

export interface FileNode extends NodeLabels, Open {
  readonly id: string;
  /** Millimetres, in the file's frame. */
  readonly position: Vec3;
}

/** What strands and cross-links have in common. */
export interface FileLine extends Open {
  readonly id: string;
  readonly from: string;
  readonly to: string;
  readonly certainty?: Certainty;
  /** From `from` to `to`, both included, at least two, millimetres; absent = not traced. */
  readonly points?: readonly Vec3[];
  /** One per point, millimetres; null = below resolution. */
  readonly radii?: readonly (number | null)[];
  /** Pins between the two nodes. */
  readonly via?: readonly Vec3[];
  readonly madeBy?: readonly (readonly [number, number, MadeBy])[];
  readonly imageFit?: number | null;
}

export interface FileStrand extends FileLine {
  readonly strut?: boolean;
  /** One entry per stretch between neighbouring pins, via.length + 1; absent = all by the guide. */
  readonly legs?: readonly LegKind[];
}

export interface FileTree extends Open {
  readonly id: string;
  readonly name?: string;
  readonly root: string | null;
  readonly nodes: readonly FileNode[];
  readonly strands: readonly FileStrand[];
}

export interface FileLandmarks extends Open {
  readonly annulus?: { readonly closed: boolean; readonly points: readonly Vec3[] };
  readonly freeEdges?: readonly (readonly Vec3[])[];
  readonly commissures?: readonly Vec3[];
  readonly muscleHeads?: readonly { readonly muscle: Muscle; readonly head: number; readonly position: Vec3 }[];
}

/** Everything of a file that says where its trees come from. */
export interface ChordaeHeader extends Open {
  /** Absent means `scan`. */
  readonly frame?: FrameName;
  /** Null when the trees belong to no scan. */
  readonly volume?: FileVolume | null;
  readonly specimen?: FileSpecimen | null;
  readonly protocol?: Readonly<Record<string, unknown>> | null;
  readonly annotator?: string;
  readonly pass?: number;
  /** ISO 8601, UTC. */
  readonly created?: string;
  readonly software?: { readonly name?: string; readonly version?: string };
  readonly radii?: "blur-corrected" | "raw";
}

/** A tree file (`*.chordae.json`), version 1, as it stands after validation. Lengths in millimetres. */
export interface ChordaeFile extends ChordaeHeader {
  readonly format: typeof CHORDAE_FORMAT;
  readonly version: typeof CHORDAE_VERSION;
  readonly unit: "mm";
  readonly trees: readonly FileTree[];
  readonly crossLinks?: readonly FileLine[];
  readonly landmarks?: FileLandmarks;
}

/** The frame of a file: `scan` when it names none. */
export function frameOf(file: ChordaeHeader): FrameName {
  return file.frame ?? "scan";
}
