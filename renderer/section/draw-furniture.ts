import { edgeLetters } from "#renderer/section/direction-letters.ts";
import { depthText, lengthText, scaleBar } from "#renderer/section/scale-bar.ts";
import type { SectionContent } from "#renderer/section/section-content.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import type { TextOnPicture } from "#renderer/section/text-on-picture.ts";
import { type PanePoint, type PaneSize, toPane, type ViewPlane } from "#renderer/section/view-plane.ts";
import { distance } from "#shared/geometry/vec3.ts";

const EDGE_PX = 14;

/** Scale bar at the lower left, caption at the lower right, direction letters at the edges. */
export function drawFrame(
  to: CanvasRenderingContext2D,
  text: TextOnPicture,
  content: SectionContent,
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  const bar = scaleBar(plane.mmPerPx, Math.min(180, size.width * 0.3));
  const y = size.height - EDGE_PX;
  cased(to, ink.casing, ink.ink, 2, () => {
    to.moveTo(EDGE_PX, y - 5);
    to.lineTo(EDGE_PX, y);
    to.lineTo(EDGE_PX + bar.px, y);
    to.lineTo(EDGE_PX + bar.px, y - 5);
  });
  text.reserve(EDGE_PX, y - 8, EDGE_PX + bar.px, y + 4);
  text.at(bar.text, EDGE_PX + bar.px / 2, y - 13, "center", ink.ink);
  if (content.caption !== "") text.at(content.caption, size.width - EDGE_PX, y - 2, "right", ink.ink);
  if (content.frame !== "LPS") return;
  const letters = edgeLetters(plane);
  text.at(letters.top, size.width / 2, EDGE_PX, "center", ink.ink);
  text.at(letters.bottom, size.width / 2, size.height - EDGE_PX, "center", ink.ink);
  text.at(letters.left, EDGE_PX, size.height / 2, "left", ink.ink);
  text.at(letters.right, size.width - EDGE_PX, size.height / 2, "right", ink.ink);
}

export function drawRuler(
  to: CanvasRenderingContext2D,
  text: TextOnPicture,
  content: SectionContent,
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  if (content.ruler === null) return;
  const { from, to: end } = content.ruler;
  const a = toPane(plane, size, from);
  const b = toPane(plane, size, end);
  const long = Math.hypot(b.x - a.x, b.y - a.y);
  const [nx, ny]: readonly [number, number] = long === 0 ? [0, 7] : [(-(b.y - a.y) / long) * 7, ((b.x - a.x) / long) * 7];
  cased(to, ink.casing, ink.ink, 1.6, () => {
    to.moveTo(a.x, a.y);
    to.lineTo(b.x, b.y);
    for (const p of [a, b]) {
      to.moveTo(p.x - nx, p.y - ny);
      to.lineTo(p.x + nx, p.y + ny);
    }
  });
  // Beside the line's middle, above it where that is possible.
  const side = ny < -1e-9 || (Math.abs(ny) <= 1e-9 && nx > 0) ? 2.2 : -2.2;
  const align = Math.abs(ny) > Math.abs(nx) ? "center" : nx * side > 0 ? "left" : "right";
  text.at(lengthText(distance(from, end)), (a.x + b.x) / 2 + nx * side, (a.y + b.y) / 2 + ny * side, align, ink.ink);
}

/** The string that the pointer snaps to: a ring with four short rays, and its depth. */
export function drawSnap(
  to: CanvasRenderingContext2D,
  text: TextOnPicture,
  content: SectionContent,
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  if (content.snap === null) return;
  const p = toPane(plane, size, content.snap.point);
  cased(to, ink.casing, ink.accent, 1.6, () => {
    to.moveTo(p.x + 6, p.y);
    to.arc(p.x, p.y, 6, 0, 2 * Math.PI);
    rays(to, p, 6, 11, Math.PI / 4);
  });
  text.beside(depthText(content.snap.depthMm), p.x, p.y, 16, ink.ink, true);
}

/** The keyboard cursor: two facing arcs and rays that leave the middle free. */
export function drawCursor(
  to: CanvasRenderingContext2D,
  content: SectionContent,
  plane: ViewPlane,
  size: PaneSize,
  ink: SectionInk,
): void {
  if (content.cursor === null) return;
  const p = toPane(plane, size, content.cursor);
  cased(to, ink.casing, ink.accent, 2, () => {
    for (const start of [0.25, 1.25]) {
      to.moveTo(p.x + 13 * Math.cos(start * Math.PI), p.y + 13 * Math.sin(start * Math.PI));
      to.arc(p.x, p.y, 13, start * Math.PI, (start + 0.5) * Math.PI);
    }
    rays(to, p, 4, 18, 0);
  });
}

function rays(to: CanvasRenderingContext2D, p: PanePoint, from: number, end: number, turn: number): void {
  for (let k = 0; k < 4; k++) {
    const angle = turn + (k * Math.PI) / 2;
    to.moveTo(p.x + from * Math.cos(angle), p.y + from * Math.sin(angle));
    to.lineTo(p.x + end * Math.cos(angle), p.y + end * Math.sin(angle));
  }
}

function cased(to: CanvasRenderingContext2D, casing: string, colour: string, width: number, path: () => void): void {
  to.lineCap = "round";
  to.lineJoin = "round";
  to.beginPath();
  path();
  to.strokeStyle = casing;
  to.lineWidth = width + 3;
  to.stroke();
  to.strokeStyle = colour;
  to.lineWidth = width;
  to.stroke();
}
