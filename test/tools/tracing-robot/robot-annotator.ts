// The robot annotator: draws trees with what a person has, and looks at the truth only for what a person would see on the
// section: where the string is, whether the snapped place lies on it, whether the guide and the finished curve follow it.
import type { FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { nearestOnPolyline, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import type { FixedPlane, RobotDesk } from "#test/tools/tracing-robot/robot-desk.ts";
import { SHARES, type StringToDraw, stringsToDraw } from "#test/tools/tracing-robot/strings-to-draw.ts";

/** So many candidates in depth are looked through. */
const MOST_IN_DEPTH = 6;
/** A line has visibly left its string when it runs so many voxels outside of it. */
const OUTSIDE_VOXELS = 1;

/** The fixed plane in which trees lie best: the one whose line of sight they extend along least. */
export function bestPlane(trees: readonly FileTree[]): FixedPlane {
  const extentOf = (tree: FileTree, axis: number) => {
    const values = tree.strands.flatMap((strand) => strand.points!.map((point) => point[axis]!));
    return Math.max(...values) - Math.min(...values);
  };
  const extent = [0, 1, 2].map((axis) => trees.reduce((sum, tree) => sum + extentOf(tree, axis), 0));
  return (["side", "front", "flat"] as const)[extent.indexOf(Math.min(...extent))]!;
}

/** Draws a tree with the guide: origin, trunk, then branch after branch. */
export async function drawTree(desk: RobotDesk, tree: FileTree): Promise<void> {
  for (const [n, string] of stringsToDraw(tree).entries()) await drawString(desk, string, n > 0);
}

/** Trees in the order in which a person draws them: the thick ones first. */
export function thickestFirst(trees: readonly FileTree[]): FileTree[] {
  const radius = (tree: FileTree) => Math.max(...tree.strands.flatMap((strand) => strand.radii!.map((each) => each ?? 0)));
  return [...trees].sort((a, b) => radius(b) - radius(a));
}

export async function drawString(desk: RobotDesk, string: StringToDraw, isBranch: boolean): Promise<void> {
  const { editor } = desk;
  const { line } = string;
  const whole = polylineLength(line);
  const begin = async () => {
    await desk.pointAt(line[0]!);
    // Where nothing passes that was drawn, the branch becomes a tree of its own: what went before it has gone astray.
    if (isBranch && (await desk.key("B"))) return;
    await chooseInDepth(desk, string);
    await desk.click();
  };
  await begin();
  let from = 0;
  // Whatever the image does, a person comes to an end: each try ends with a pin farther on, the end, or a step back and a nearer pin.
  for (let most = whole; ; ) {
    let [to, isGood] = [most, false];
    for (const share of SHARES) {
      to = from + share * (most - from);
      await desk.pointAt(pointAt(line, to));
      await chooseInDepth(desk, string);
      const guide = editor.guide.value;
      isGood = guide !== null && follows(desk, guide.points, string, from, to);
      if (isGood) break;
    }
    if (!isGood && !editor.beside.isClosed.value && editor.document.value.strands.size > 0) {
      // It rides another string: those that are drawn are closed to it, and opened again when this one is done.
      await desk.key("Shift+I");
      continue;
    }
    if (!isGood) {
      to = from + straightAhead(desk, string, from);
      await desk.key("S");
      await desk.pointAt(pointAt(line, to));
    }
    if (to < whole) {
      await desk.click();
      from = to;
      most = whole;
      continue;
    }
    const before = new Set(editor.document.value.strands.keys());
    await desk.key(string.endKey);
    const document = editor.document.value;
    const drawn = [...document.strands.values()].filter((strand) => !before.has(strand.id) || strand.curve !== null);
    const nearest = drawn
      .map((strand) => polylineOf(document, strand))
      .filter(
        (points) =>
          distance(points.at(-1)!, line.at(-1)!) < 20 * desk.voxelMm || distance(points[0]!, line.at(-1)!) < 20 * desk.voxelMm,
      );
    if (nearest.some((points) => follows(desk, points, string, from, whole)) || whole - from < 8 * desk.voxelMm) {
      if (editor.beside.isClosed.value) await desk.key("Shift+I");
      return;
    }
    // The finished curve left the string where the guide did not: back, and a pin half way.
    await desk.key("Ctrl+Z");
    if (editor.projection.value.kind === "nothing") await begin();
    most = from + (whole - from) / 2;
  }
}

/** How far a straight line from a place of the string stays on it. */
function straightAhead(desk: RobotDesk, string: StringToDraw, from: number): number {
  const left = polylineLength(string.line) - from;
  for (const share of SHARES) {
    const chord = [pointAt(string.line, from), pointAt(string.line, from + share * left)];
    if (follows(desk, chord, string, from, from + share * left)) return share * left;
  }
  return Math.min(left, 4 * desk.voxelMm);
}

/**
 * Takes the next string in depth until the place that the pointer snapped to lies on the string meant, as it is seen; where none
 * does, the snap is released.
 */
export async function chooseInDepth(desk: RobotDesk, string: StringToDraw): Promise<void> {
  for (let n = 0; ; n++) {
    const snapped = desk.editor.snapped.value;
    if (snapped === null || snapped.candidates === 0 || isOn(desk, snapped.point, string)) return;
    if (n >= Math.min(snapped.candidates, MOST_IN_DEPTH) - 1) return desk.release();
    await desk.nextInDepth();
  }
}

function isOn(desk: RobotDesk, place: Vec3, { line, radii }: StringToDraw): boolean {
  const near = nearestOnPolyline(line, place);
  return near.distance <= radii[near.segment]! + OUTSIDE_VOXELS * desk.voxelMm;
}

/** True when a line stays on the string all the way between two of its places. */
function follows(desk: RobotDesk, drawn: readonly Vec3[], string: StringToDraw, from: number, to: number): boolean {
  const step = 2 * desk.voxelMm;
  for (let at = from + step; at < to; at += step) {
    const place = pointAt(string.line, at);
    const radius = string.radii[nearestOnPolyline(string.line, place).segment]!;
    if (nearestOnPolyline(drawn, place).distance > radius + OUTSIDE_VOXELS * desk.voxelMm) return false;
  }
  return true;
}
