import type { SectionContent } from "#renderer/section/section-content.ts";
import { awayFrom, type PanePoint, type PaneSize, toPane, type ViewPlane } from "#renderer/section/view-plane.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { type DrawnStrand, drawnStrands } from "#shared/marks/drawn-strand.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import type { TreeDocument, TreeNode } from "#shared/trees/document.ts";

/** A strand as the pane sees it. */
export interface ProjectedStrand {
  readonly drawn: DrawnStrand;
  readonly selected: boolean;
  /** shape [n, 3]: x and y in CSS pixels, depth in millimetres. */
  readonly seen: Float64Array;
}

export interface ProjectedNode {
  readonly node: TreeNode;
  readonly selected: boolean;
  readonly seen: PanePoint;
}

export interface ProjectedPin {
  readonly strand: DrawnStrand["id"];
  readonly index: number;
  readonly position: PointMm;
  readonly seen: PanePoint;
}

/** Everything of the trees that can show in the pane; what lies wholly beside it or too deep is left out. */
export interface ProjectedScene {
  readonly strands: readonly ProjectedStrand[];
  readonly nodes: readonly ProjectedNode[];
  /** Pins of the selected strand only: those of all strands would hide the picture. */
  readonly pins: readonly ProjectedPin[];
  readonly underWay: readonly PanePoint[];
  readonly places: readonly ProjectedPlace[];
}

export interface ProjectedPlace {
  readonly place: MarkedPlace;
  readonly seen: PanePoint;
}

export const EMPTY_SCENE: ProjectedScene = { strands: [], nodes: [], pins: [], underWay: [], places: [] };

/** Beyond the slab strands fade out over this distance, millimetres: enough to see where a string goes next. */
export const FADE_MM = 2;
const MARGIN_PX = 24;

const drawnOf = new WeakMap<TreeDocument, DrawnStrand[]>();

function drawnOnce(document: TreeDocument): DrawnStrand[] {
  let drawn = drawnOf.get(document);
  if (drawn === undefined) {
    drawn = drawnStrands(document);
    drawnOf.set(document, drawn);
  }
  return drawn;
}

export function projectScene(content: SectionContent, plane: ViewPlane, size: PaneSize): ProjectedScene {
  const reach = content.slabMm / 2 + FADE_MM;
  const underWay = (content.underWay?.pins ?? []).map((pin) => toPane(plane, size, pin));
  const { document, selection } = content;
  const shown = content.strands ?? (document === null ? [] : drawnOnce(document));
  const strands: ProjectedStrand[] = [];
  const pins: ProjectedPin[] = [];
  for (const drawn of shown) {
    const bySelection =
      selection.strand === undefined
        ? selection.tree !== undefined && drawn.tree === selection.tree
        : drawn.id === selection.strand;
    const selected = drawn.picked ?? bySelection;
    if (drawn.id === selection.strand) {
      drawn.pins.forEach((position, index) => {
        const seen = toPane(plane, size, position);
        if (inPane(seen, size) && Math.abs(seen.depthMm) <= reach) pins.push({ strand: drawn.id, index, position, seen });
      });
    }
    const seen = projectPoints(drawn.points, plane, size);
    if (canShow(seen, size, reach)) strands.push({ drawn, selected, seen });
  }
  const nodes: ProjectedNode[] = [];
  for (const node of document?.nodes.values() ?? []) {
    const seen = toPane(plane, size, node.position);
    if (inPane(seen, size) && Math.abs(seen.depthMm) <= reach) {
      nodes.push({ node, seen, selected: node.id === selection.node });
    }
  }
  const places: ProjectedPlace[] = [];
  for (const place of content.places) {
    const seen = toPane(plane, size, place.at);
    if (inPane(seen, size) && Math.abs(seen.depthMm) <= reach) places.push({ place, seen });
  }
  return { strands, nodes, pins, underWay, places };
}

/** Pane coordinates and depths of flat xyz points; shape [n, 3], CSS pixels and millimetres. */
export function projectPoints(points: ArrayLike<number>, plane: ViewPlane, size: PaneSize): Float64Array {
  const out = new Float64Array(points.length);
  const { right, down, centre } = plane;
  const away = awayFrom(plane);
  const k = 1 / plane.mmPerPx;
  for (let i = 0; i + 2 < points.length; i += 3) {
    const x = points[i]! - centre[0];
    const y = points[i + 1]! - centre[1];
    const z = points[i + 2]! - centre[2];
    out[i] = size.width / 2 + (x * right[0] + y * right[1] + z * right[2]) * k;
    out[i + 1] = size.height / 2 + (x * down[0] + y * down[1] + z * down[2]) * k;
    out[i + 2] = x * away[0] + y * away[1] + z * away[2];
  }
  return out;
}

function inPane(p: PanePoint, size: PaneSize): boolean {
  return p.x >= -MARGIN_PX && p.y >= -MARGIN_PX && p.x <= size.width + MARGIN_PX && p.y <= size.height + MARGIN_PX;
}

/** False only when the whole line lies to one side of what is shown. */
function canShow(seen: Float64Array, size: PaneSize, reachMm: number): boolean {
  const low = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  const high = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (let i = 0; i < seen.length; i++) {
    const axis = i % 3;
    low[axis] = Math.min(low[axis]!, seen[i]!);
    high[axis] = Math.max(high[axis]!, seen[i]!);
  }
  return (
    low[0]! <= size.width + MARGIN_PX &&
    high[0]! >= -MARGIN_PX &&
    low[1]! <= size.height + MARGIN_PX &&
    high[1]! >= -MARGIN_PX &&
    low[2]! <= reachMm &&
    high[2]! >= -reachMm
  );
}
