// A tree as a person draws it: which strings in one go, in which order, and how far a pin is tried.
import { END_COMMANDS } from "#renderer/editor/commands/trace-commands.ts";
import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** Where the next pin is tried, as shares of what is left: as far as the guide follows the string. */
export const SHARES = [1, 0.75, 0.55, 0.4, 0.28, 0.18, 0.1];

/** A string to draw in one go, from a place already drawn (or the origin) to an end. */
export interface StringToDraw {
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
