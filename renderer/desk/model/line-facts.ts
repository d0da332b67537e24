import type { Selection } from "#renderer/editor/selection.ts";
import { KIND_WORDS, treeName } from "#renderer/editor/session/words.ts";
import type { StripContent } from "#renderer/strip/strip-content.ts";
import { arcLengths, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { treeMark } from "#shared/marks/tree-mark.ts";
import { strandsAt } from "#shared/trees/adjacency.ts";
import type { CrossLink, CrossLinkId, Strand, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { arcLengthsOfPins } from "#shared/trees/edits/place-on-line.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

export interface LineFacts
  extends Pick<
    StripContent,
    "title" | "lengthMm" | "at" | "radii" | "imageFit" | "pins" | "colour" | "topWord" | "bottomWord" | "doubtful"
  > {
  readonly points: readonly Vec3[];
  readonly curve: string | null;
}

let last: { document: TreeDocument; line: string; facts: LineFacts | null } | null = null;

/** What the strip says of the selected line, or of the strand at the selected end; null when neither is selected. */
export function lineFacts(document: TreeDocument, selection: Selection): LineFacts | null {
  const line = selectedLine(document, selection);
  if (line === null) return null;
  if (last !== null && last.document === document && last.line === line.id) return last.facts;
  last = { document, line: line.id, facts: factsOf(document, line) };
  return last.facts;
}

/** The selected strand or cross-link; for a selected end, the strand that it ends; for a tree, its first strand. */
export function selectedLine(document: TreeDocument, selection: Selection): Strand | CrossLink | null {
  const { strand, node, tree } = selection;
  if (strand !== undefined) {
    return (
      (strand.startsWith("x") ? document.crossLinks.get(strand as CrossLinkId) : document.strands.get(strand as StrandId)) ?? null
    );
  }
  const root = tree === undefined ? undefined : document.trees.get(tree)?.root;
  const end = node ?? root;
  const here = end == null ? [] : strandsAt(document, end);
  return here.length === 1 ? here[0]! : null;
}

function factsOf(document: TreeDocument, line: Strand | CrossLink): LineFacts | null {
  const points = polylineOf(document, line);
  if (points.length < 2) return null;
  const curve = line.curve === null ? undefined : document.curves.get(line.curve);
  const tree = "tree" in line ? line.tree : null;
  return {
    title: tree === null ? `cross-link ${line.id}` : `${treeName(document, tree)} ${line.id}`,
    points,
    curve: line.curve,
    lengthMm: polylineLength(points),
    at: Float64Array.from(arcLengths(points)),
    radii: curve?.radii ?? new Float64Array(points.length).fill(Number.NaN),
    imageFit: curve?.imageFit ?? null,
    pins: arcLengthsOfPins(points, line.via),
    doubtful: [],
    colour: tree === null ? 0 : treeMark(tree).colour,
    topWord: KIND_WORDS[document.nodes.get(line.to)!.kind],
    bottomWord: KIND_WORDS[document.nodes.get(line.from)!.kind],
  };
}
