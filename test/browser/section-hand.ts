import type { Page } from "playwright-core";

type Place = readonly [number, number];

/**
 * A hand on the section: it learns where places lie by reading the position under the pointer at two points of the pane, so it
 * needs to know nothing of how the page computes them.
 */
export class SectionHand {
  private constructor(
    private readonly page: Page,
    private readonly toPixel: (place: Place) => Place,
  ) {}

  static async on(page: Page): Promise<SectionHand> {
    const box = (await page.locator(".section-view").boundingBox())!;
    const at = (share: Place): Place => [box.x + box.width * share[0], box.y + box.height * share[1]];
    const read = async (pixel: Place): Promise<Place> => {
      // Alt: the place itself, not what it would snap to.
      await page.keyboard.down("Alt");
      await page.mouse.move(pixel[0] - 3, pixel[1] - 3);
      await page.mouse.move(pixel[0], pixel[1]);
      await page.waitForTimeout(300);
      const text = (await page.locator(".readout").textContent()) ?? "";
      await page.keyboard.up("Alt");
      const found = /x (-?[\d.]+)\s+y (-?[\d.]+)/.exec(text);
      if (found === null) throw new Error(`the readout gives no position: ${text}`);
      return [Number(found[1]), Number(found[2])];
    };
    const a = at([0.2, 0.2]);
    const b = at([0.8, 0.8]);
    const placeA = await read(a);
    const placeB = await read(b);
    const scale = [0, 1].map((axis) => (b[axis]! - a[axis]!) / (placeB[axis]! - placeA[axis]!));
    return new SectionHand(page, (place) => [
      a[0] + (place[0] - placeA[0]) * scale[0]!,
      a[1] + (place[1] - placeA[1]) * scale[1]!,
    ]);
  }

  pixelOf(place: Place): Place {
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
