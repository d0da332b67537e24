import { awayFrom, type PaneSize, toPane, type ViewPlane } from "#renderer/section/view-plane.ts";
import type { PlaneMm, SectionHeader } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import { add, cross, dot, normalise, scale } from "#shared/geometry/vec3.ts";

/** An image may be shown on another plane while the next one is under way, but not one that is turned by more than this. */
const SAME_DIRECTION = Math.cos((12 * Math.PI) / 180);

/** Keeps the last grey picture as a bitmap canvas. */
export class GreyPicture {
  private readonly canvas = document.createElement("canvas");
  private shown: BinaryFrame<SectionHeader> | null = null;

  /** Draws `image` where its plane lies in the pane. False when there is nothing fitting to draw. */
  draw(to: CanvasRenderingContext2D, image: BinaryFrame<SectionHeader>, plane: ViewPlane, size: PaneSize): boolean {
    const own = image.header.plane;
    if (dot(normalise(cross(own.u, own.v)), awayFrom(plane)) < SAME_DIRECTION) return false;
    if (image !== this.shown) this.fill(image);
    const [a, b, c, d, e, f] = placement(own, plane, size);
    const crisp = Math.abs(a - 1) < 1e-4 && Math.abs(d - 1) < 1e-4 && Math.abs(b) < 1e-6 && Math.abs(c) < 1e-6;
    to.imageSmoothingEnabled = !crisp;
    to.imageSmoothingQuality = "medium";
    if (crisp) to.setTransform(1, 0, 0, 1, Math.round(e), Math.round(f));
    else to.setTransform(a, b, c, d, e, f);
    to.drawImage(this.canvas, 0, 0);
    to.setTransform(1, 0, 0, 1, 0, 0);
    return true;
  }

  private fill(image: BinaryFrame<SectionHeader>): void {
    const { width, height } = image.header;
    this.canvas.width = width;
    this.canvas.height = height;
    const context = this.canvas.getContext("2d")!;
    const pixels = context.createImageData(width, height);
    const words = new Uint32Array(pixels.data.buffer);
    const grey = image.body;
    // Same value in all three channels, so the order of bytes in a word does not matter; the alpha is the fourth byte.
    for (let i = 0; i < words.length; i++) words[i] = (grey[i]! * 0x010101) | 0xff000000;
    context.putImageData(pixels, 0, 0);
    this.shown = image;
  }
}

/** Canvas transform (a, b, c, d, e, f), in device pixels, that lays a picture's pixels where its plane is in the pane. */
export function placement(
  picture: PlaneMm,
  plane: ViewPlane,
  size: PaneSize,
): readonly [number, number, number, number, number, number] {
  const corner = toPane(plane, size, picture.origin);
  const alongRow = toPane(plane, size, add(picture.origin, scale(picture.u, picture.width)));
  const alongColumn = toPane(plane, size, add(picture.origin, scale(picture.v, picture.height)));
  const k = size.ratio;
  return [
    ((alongRow.x - corner.x) * k) / picture.width,
    ((alongRow.y - corner.y) * k) / picture.width,
    ((alongColumn.x - corner.x) * k) / picture.height,
    ((alongColumn.y - corner.y) * k) / picture.height,
    corner.x * k,
    corner.y * k,
  ];
}
