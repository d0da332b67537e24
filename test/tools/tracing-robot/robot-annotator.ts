// The robot annotator: draws trees with what a person has, and looks at the truth only for what a person would see on the
// section: where the string is, whether the snapped place lies on it, whether the guide and the finished curve follow it.
import { END_COMMANDS } from "#renderer/editor/commands/trace-commands.ts";
import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { nearestOnPolyline, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import type { FixedPlane, RobotDesk } from "#test/tools/tracing-robot/robot-desk.ts";

/** Where the next pin is tried, as shares of what is left: as far as the guide follows the string. */
const SHARES = [1, 0.75, 0.55, 0.4, 0.28, 0.18, 0.1];
/** So many candidates in depth are looked through. */
const MOST_IN_DEPTH = 6;
/** A line has visibly left its string when it runs so many voxels outside of it. */
const OUTSIDE_VOXELS = 1;

/** A string to draw in one go, from a place already drawn (or the origin) to an end. */
interface StringToDraw {
  readonly line: readonly Vec3[];
  /** One for each point of the line. */
  readonly radii: readonly number[];
  readonly endKey: string;
}

/** The keys that end a strand, by the kind of its end. */
const END_KEYS: Readonly<Record<string, string>> = Object.fromEntries(
  END_COMMANDS.map(({ name, keys }) => [name, keys[0]!] as const),
);
const END_NAMES: Readonly<Record<string, string>> = {
  insertion: "end-insertion",
  "muscle-end": "end-muscle",
  "wall-end": "end-wall",
  ruptured: "end-ruptured",
  cut: "end-cut",
  "lost-end": "end-lost",
  "scan-edge": "end-scan-edge",
};

/** The fixed plane in which trees lie best: the one whose line of sight they extend along least. */
export function bestPlane(trees: readonly FileTree[]): FixedPlane {
  const points = trees.flatMap((tree) => tree.strands.flatMap((strand) => strand.points!));
  const extent = [0, 1, 2].map((axis) => {
    const values = points.map((point) => point[axis]!);
    return Math.max(...values) - Math.min(...values);
  });
  return (["side", "front", "flat"] as const)[extent.indexOf(Math.min(...extent))]!;
}

/** The trunk to the end farthest from its beginning, then what leaves it, each the same way. */
export function stringsToDraw(tree: FileTree): StringToDraw[] {
  const kinds = new Map(tree.nodes.map((node) => [node.id, node.kind]));
  const outward = (node: string): FileStrand[] => tree.strands.filter((strand) => strand.from === node);
  const reach = (strand: FileStrand): number =>
    polylineLength(strand.points!) + Math.max(0, ...outward(strand.to).map((next) => reach(next)));
  const strings: StringToDraw[] = [];
  const draw = (first: FileStrand): void => {
    const way: FileStrand[] = [];
    const left: FileStrand[] = [];
    for (let strand: FileStrand | undefined = first; strand !== undefined; ) {
      way.push(strand);
      const [farthest, ...others] = outward(strand.to).sort((a, b) => reach(b) - reach(a));
      left.push(...others);
      strand = farthest;
    }
    strings.push({
      line: way.flatMap((strand, n) => strand.points!.slice(n === 0 ? 0 : 1)),
      radii: way.flatMap((strand, n) => strand.radii!.slice(n === 0 ? 0 : 1).map((radius) => radius ?? 0)),
      endKey: END_KEYS[END_NAMES[kinds.get(way.at(-1)!.to)!] ?? ""]!,
    });
    for (const strand of left) draw(strand);
  };
  for (const [n, strand] of outward(tree.root!).entries()) {
    if (n > 0) throw new Error("a tree with one trunk expected");
    draw(strand);
  }
  return strings;
}

/** Draws a tree with the guide: origin, trunk, then branch after branch. */
export async function drawTree(desk: RobotDesk, tree: FileTree): Promise<void> {
  for (const [n, string] of stringsToDraw(tree).entries()) await drawString(desk, string, n > 0);
}

async function drawString(desk: RobotDesk, string: StringToDraw, isBranch: boolean): Promise<void> {
  const { editor } = desk;
  const { line } = string;
  const whole = polylineLength(line);
  const begin = async () => {
    await desk.pointAt(line[0]!);
    if (isBranch) {
      await desk.key("B");
      return;
    }
    await chooseInDepth(desk, string);
    await desk.click();
  };
  await begin();
  let from = 0;
  // Whatever the image does, a person comes to an end; each try ends with a pin farther on or with the end.
  for (let most = whole; ; ) {
    let to = most;
    for (const share of SHARES) {
      to = from + share * (most - from);
      await desk.pointAt(pointAt(line, to));
      await chooseInDepth(desk, string);
      const guide = editor.guide.value;
      if (guide !== null && follows(desk, guide.points, string, from, to)) break;
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
    if (nearest.some((points) => follows(desk, points, string, from, whole)) || whole - from < 8 * desk.voxelMm) return;
    // The finished curve left the string where the guide did not: back, and a pin half way.
    await desk.key("Ctrl+Z");
    if (editor.projection.value.kind === "nothing") await begin();
    most = from + (whole - from) / 2;
  }
}

/** Takes the next string in depth until the place that the pointer snapped to lies on the string meant, as it is seen. */
async function chooseInDepth(desk: RobotDesk, string: StringToDraw): Promise<void> {
  for (let n = 0; n < MOST_IN_DEPTH; n++) {
    const snapped = desk.editor.snapped.value;
    if (snapped === null || snapped.candidates < 2 || isOn(desk, snapped.point, string)) return;
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
