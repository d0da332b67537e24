import type { SectionInk } from "#renderer/section/section-ink.ts";

interface Box {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** Writes cased texts on a picture, never outside the pane and never over another text. */
export class TextOnPicture {
  private readonly taken: Box[] = [];

  constructor(
    private readonly to: CanvasRenderingContext2D,
    private readonly width: number,
    private readonly height: number,
    private readonly ink: SectionInk,
  ) {
    to.font = ink.font;
    to.textBaseline = "middle";
  }

  /**
   * Writes `text` beside a point (CSS pixels), at the first side where it fits.
   * @param must write it even when it covers another text.
   * @returns false when it was left out.
   */
  beside(text: string, x: number, y: number, gap: number, colour: string, must = false): boolean {
    const wide = this.to.measureText(text).width;
    const tries: readonly (readonly [number, number])[] = [
      [x + gap, y],
      [x - gap - wide, y],
      [x - wide / 2, y - gap - 9],
      [x - wide / 2, y + gap + 9],
    ];
    for (const [left, middle] of tries) {
      const box = boxOf(left, middle, wide);
      if (this.isInside(box) && !this.taken.some((other) => overlap(box, other))) return this.write(text, box, colour);
    }
    if (!must) return false;
    const left = Math.min(Math.max(4, x + gap), Math.max(4, this.width - wide - 4));
    const middle = Math.min(Math.max(12, y), Math.max(12, this.height - 12));
    return this.write(text, boxOf(left, middle, wide), colour);
  }

  /** Writes with its left edge, middle or right edge at `x`; for the pane's own marks, which come first. */
  at(text: string, x: number, y: number, align: "left" | "center" | "right", colour: string): void {
    const wide = this.to.measureText(text).width;
    const left = align === "left" ? x : align === "right" ? x - wide : x - wide / 2;
    this.write(text, boxOf(left, y, wide), colour);
  }

  /** Keeps a box free of texts. */
  reserve(left: number, top: number, right: number, bottom: number): void {
    this.taken.push({ left, top, right, bottom });
  }

  private write(text: string, box: Box, colour: string): true {
    this.taken.push(box);
    const middle = (box.top + box.bottom) / 2;
    this.to.textAlign = "left";
    this.to.lineJoin = "round";
    this.to.strokeStyle = this.ink.casing;
    this.to.lineWidth = 3.5;
    this.to.strokeText(text, box.left, middle);
    this.to.fillStyle = colour;
    this.to.fillText(text, box.left, middle);
    return true;
  }

  private isInside(box: Box): boolean {
    return box.left >= 3 && box.top >= 3 && box.right <= this.width - 3 && box.bottom <= this.height - 3;
  }
}

function boxOf(left: number, middle: number, wide: number): Box {
  return { left, right: left + wide, top: middle - 8, bottom: middle + 8 };
}

function overlap(a: Box, b: Box): boolean {
  return a.left < b.right + 2 && b.left < a.right + 2 && a.top < b.bottom && b.top < a.bottom;
}
