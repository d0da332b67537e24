// The robot with follow: proposes the whole string from one place, leaves out what runs elsewhere, takes the rest, and draws what
// is missing by the guide.
import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { nearestOnPolyline, pointAt, polylineLength, resample } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import { chooseInDepth, drawString, drawTree } from "#test/tools/tracing-robot/robot-annotator.ts";
import type { RobotDesk } from "#test/tools/tracing-robot/robot-desk.ts";
import { type StringToDraw, stringsToDraw } from "#test/tools/tracing-robot/strings-to-draw.ts";

/** A strand is drawn when so much of it is; less of a trunk is worth nothing. */
const DRAWN_SHARE = 0.8;
/** Its end is reached when it is so near, voxels: two ends of a thick string lie within its radius of one line. */
const END_VOXELS = 8;
/** A proposed strand runs elsewhere when more than this share of it does. */
const ELSEWHERE_SHARE = 0.4;
/** How far beside its radius a line may run and still be seen on its string, voxels. */
const BESIDE_VOXELS = 1.5;
const SPUR_VOXELS = 10;
/** To set the kind of an end: a click on it and a choice. */
const KIND_CLICKS = 1;
const KIND_KEYS = 1;

/** Draws a tree from one proposal where that shows its trunk, else by the guide alone. */
export async function followTree(desk: RobotDesk, tree: FileTree): Promise<void> {
  const { editor } = desk;
  const trunk = stringsToDraw(tree)[0]!;
  await desk.pointAt(pointAt(trunk.line, polylineLength(trunk.line) / 2));
  await chooseInDepth(desk, trunk);
  await desk.key("F");
  const following = editor.proposing.following.value;
  if (following.kind !== "ready") return drawTree(desk, tree);
  for (const { id, points } of following.proposal.strands) {
    if (id === following.proposal.clicked.strand) continue;
    const line = vectorsOf(points);
    if (shareOn(desk, line, tree.strands) >= 1 - ELSEWHERE_SHARE && !isSpur(desk, line, tree)) continue;
    await desk.pointAt(pointAt(line, polylineLength(line) / 2));
    // What hangs on a strand that was left out went with it.
    const now = editor.proposing.following.value;
    if (now.kind !== "ready" || now.leftOut.has(id) || editor.proposedAt() === null) continue;
    await desk.click();
  }
  const { edits } = editor.keeper;
  const before = new Set(editor.document.value.strands.keys());
  await desk.key("F");
  const root = tree.strands.find(({ from }) => from === tree.root)!;
  if (!isDrawn(desk, { line: root.points!, radii: root.radii!.map((radius) => radius ?? 0) })) {
    // A proposal that was refused has changed nothing.
    if (editor.keeper.edits > edits) await desk.key("Ctrl+Z");
    return drawTree(desk, tree);
  }
  for (const string of stringsToDraw(tree).slice(1)) {
    if (!isDrawn(desk, string)) await drawString(desk, string, true);
  }
  correctKinds(desk, tree, before);
}

/** A short piece that ends where the string has no node: unevenness that a person sees as such. */
function isSpur(desk: RobotDesk, line: readonly Vec3[], tree: FileTree): boolean {
  if (polylineLength(line) > SPUR_VOXELS * desk.voxelMm) return false;
  return tree.nodes.every(({ position }) =>
    [line[0]!, line.at(-1)!].some((end) => distance(end, position) > SPUR_VOXELS * desk.voxelMm),
  );
}

/** Counts, for each end whose kind the proposal got wrong, what it takes to set it. */
function correctKinds(desk: RobotDesk, tree: FileTree, before: ReadonlySet<string>): void {
  const document = desk.editor.document.value;
  const fresh = [...document.strands.values()].filter(({ id }) => !before.has(id));
  const nodes = new Set(fresh.flatMap(({ from, to }) => [from, to]));
  for (const node of tree.nodes) {
    // Trial strings end in the middle of nowhere: no kind is the right one there.
    if (node.kind === "fork" || node.kind === "scan-edge") continue;
    const near = [...nodes]
      .map((id) => document.nodes.get(id)!)
      .sort((a, b) => distance(a.position, node.position) - distance(b.position, node.position))[0];
    if (near === undefined || near.kind === node.kind) continue;
    desk.effort.clicks += KIND_CLICKS;
    desk.effort.keys += KIND_KEYS;
  }
}

function isDrawn(desk: RobotDesk, { line, radii }: Pick<StringToDraw, "line" | "radii">): boolean {
  const document = desk.editor.document.value;
  const drawn = [...document.strands.values()].map((each) => polylineOf(document, each));
  const places = resample(line, 2 * desk.voxelMm);
  const isNear = (place: Vec3) => {
    const radius = radii[nearestOnPolyline(line, place).segment]!;
    return drawn.some((each) => nearestOnPolyline(each, place).distance <= radius + BESIDE_VOXELS * desk.voxelMm);
  };
  const end = line.at(-1)!;
  const reached = Math.min(...drawn.map((each) => nearestOnPolyline(each, end).distance));
  return reached <= END_VOXELS * desk.voxelMm && places.filter(isNear).length >= DRAWN_SHARE * places.length;
}

/** Share of a line that runs on one of the strands. */
function shareOn(desk: RobotDesk, line: readonly Vec3[], strands: readonly FileStrand[]): number {
  const places = resample(line, 2 * desk.voxelMm);
  const isOn = (place: Vec3) =>
    strands.some(({ points, radii }) => {
      const near = nearestOnPolyline(points!, place);
      return near.distance <= (radii![near.segment] ?? 0) + BESIDE_VOXELS * desk.voxelMm;
    });
  return places.filter(isOn).length / Math.max(places.length, 1);
}

function vectorsOf(flat: readonly number[]): Vec3[] {
  return Array.from({ length: flat.length / 3 }, (_, i): Vec3 => [flat[3 * i]!, flat[3 * i + 1]!, flat[3 * i + 2]!]);
}
