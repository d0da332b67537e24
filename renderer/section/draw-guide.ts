import { projectPoints } from "#renderer/section/project-scene.ts";
import type { ShownGuide, StrandUnderWay } from "#renderer/section/section-content.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import type { PaneSize, ViewPlane } from "#renderer/section/view-plane.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";

/**
 * The strand under way and its live guide. They are never faded: whoever traces has to see the whole of them. A coarse
 * preview is dotted; a stretch that leaves the string stands in the warning colour between cross marks.
 */
export function drawUnderWay(
  to: CanvasRenderingContext2D,
  underWay: StrandUnderWay | null,
  guide: ShownGuide | null,
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  to.lineJoin = "round";
  to.lineCap = "round";
  for (const curve of underWay?.curves ?? []) line(to, projectPoints(curve, plane, size), 0, undefined, ink, 2.4, []);
  if (guide === null || guide.points.length < 6) return;
  const seen = projectPoints(guide.points, plane, size);
  line(to, seen, 0, undefined, ink, 2.4, guide.coarse ? [0.1, 5.5] : []);
  for (const [first, last] of guide.doubtful) {
    line(to, seen, first, last, { ...ink, accent: ink.warn }, 3.4, guide.coarse ? [0.1, 5.5] : []);
    crossMark(to, seen, first, ink);
    crossMark(to, seen, last, ink);
  }
}

/** A proposal: dashed, since nothing of it is drawn yet; what is left out is faint and dotted. */
export function drawProposal(
  to: CanvasRenderingContext2D,
  lines: readonly ProposedLine[],
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  to.lineJoin = "round";
  to.lineCap = "butt";
  for (const { points, kept, doubtful } of lines) {
    if (points.length < 6) continue;
    const seen = projectPoints(points, plane, size);
    line(to, seen, 0, undefined, kept ? ink : { ...ink, accent: ink.ink }, kept ? 2.4 : 1.2, kept ? [8, 5] : [1.5, 5]);
    if (!kept) continue;
    for (const [first, last] of doubtful) {
      line(to, seen, first, last, { ...ink, accent: ink.warn }, 3.4, [8, 5]);
      crossMark(to, seen, first, ink);
      crossMark(to, seen, last, ink);
    }
  }
}

function line(
  to: CanvasRenderingContext2D,
  seen: Float64Array,
  first: number,
  last: number | undefined,
  ink: SectionInk,
  width: number,
  dash: number[],
): void {
  const end = Math.min(seen.length / 3 - 1, last ?? Number.POSITIVE_INFINITY);
  to.beginPath();
  for (let i = first; i <= end; i++) {
    if (i === first) to.moveTo(seen[i * 3]!, seen[i * 3 + 1]!);
    else to.lineTo(seen[i * 3]!, seen[i * 3 + 1]!);
  }
  to.setLineDash(dash);
  to.strokeStyle = ink.casing;
  to.lineWidth = width + 2.6;
  to.stroke();
  to.strokeStyle = ink.accent;
  to.lineWidth = width;
  to.stroke();
  to.setLineDash([]);
}

/** A short stroke across the line. */
function crossMark(to: CanvasRenderingContext2D, seen: Float64Array, index: number, ink: SectionInk): void {
  const last = seen.length / 3 - 1;
  const i = Math.min(last, Math.max(0, index));
  const a = Math.max(0, i - 1) * 3;
  const b = Math.min(last, i + 1) * 3;
  const dx = seen[b]! - seen[a]!;
  const dy = seen[b + 1]! - seen[a + 1]!;
  const length = Math.hypot(dx, dy);
  if (length === 0) return;
  const [nx, ny] = [(-dy / length) * 6, (dx / length) * 6];
  to.beginPath();
  to.moveTo(seen[i * 3]! - nx, seen[i * 3 + 1]! - ny);
  to.lineTo(seen[i * 3]! + nx, seen[i * 3 + 1]! + ny);
  to.strokeStyle = ink.casing;
  to.lineWidth = 5;
  to.stroke();
  to.strokeStyle = ink.warn;
  to.lineWidth = 2.2;
  to.stroke();
}
