import type { Page } from "playwright-core";

/** A place in millimetres: x and y, and z where the section does not lie across it. */
type Place = readonly [number, number] | readonly [number, number, number];
type Pixel = readonly [number, number];

/**
 * A hand on the section: it learns where places lie by reading the position under the pointer at points of the pane, so it
 * needs to know nothing of how the page computes them. The section must lie along the scan's axes.
 */
export class SectionHand {
  private constructor(
    private readonly page: Page,
    private readonly toPixel: (place: Place) => Pixel,
  ) {}

  static async on(page: Page): Promise<SectionHand> {
    const box = (await page.locator(".section-view").boundingBox())!;
    const at = (share: Pixel): Pixel => [box.x + box.width * share[0], box.y + box.height * share[1]];
    const read = async (pixel: Pixel): Promise<readonly number[]> => {
      // Alt: the place itself, not what it would snap to.
      await page.keyboard.down("Alt");
      await page.mouse.move(pixel[0] - 3, pixel[1] - 3);
      await page.mouse.move(pixel[0], pixel[1]);
      await page.waitForTimeout(300);
      const text = (await page.locator(".readout").textContent()) ?? "";
      await page.keyboard.up("Alt");
      const found = /x (-?[\d.]+)\s+y (-?[\d.]+)\s+z (-?[\d.]+)/.exec(text);
      if (found === null) throw new Error(`the readout gives no position: ${text}`);
      return found.slice(1, 4).map(Number);
    };
    const [corner, right, down] = [at([0.2, 0.2]), at([0.8, 0.2]), at([0.2, 0.8])];
    const [placeCorner, placeRight, placeDown] = [await read(corner), await read(right), await read(down)];
    // Each side of the pane runs along one axis of the scan: the one that changes most.
    const axisOf = (place: readonly number[]) => {
      const change = place.map((value, axis) => Math.abs(value - placeCorner[axis]!));
      return change.indexOf(Math.max(...change));
    };
    const along = (side: 0 | 1, end: Pixel, place: readonly number[]) => {
      const axis = axisOf(place);
      const scale = (end[side] - corner[side]) / (place[axis]! - placeCorner[axis]!);
      return (wanted: Place) => corner[side] + ((wanted[axis] ?? 0) - placeCorner[axis]!) * scale;
    };
    const [across, downwards] = [along(0, right, placeRight), along(1, down, placeDown)];
    return new SectionHand(page, (place) => [across(place), downwards(place)]);
  }

  pixelOf(place: Place): Pixel {
    return this.toPixel(place);
  }

  /** Moves there and waits until the pointer has been answered. */
  async point(place: Place): Promise<void> {
    const [x, y] = this.toPixel(place);
    await this.page.mouse.move(x, y, { steps: 4 });
    await this.page.waitForTimeout(150);
  }

  async click(place: Place): Promise<void> {
    await this.point(place);
    const [x, y] = this.toPixel(place);
    await this.page.mouse.click(x, y);
  }

  async key(place: Place, key: string): Promise<void> {
    await this.point(place);
    await this.page.keyboard.press(key);
  }
}
