// The robot annotator in the real page: a hand that shakes on the section, and eyes on the readout. It knows the truth only as a
// person sees it: where on the section the string is that is to be drawn next. What it does is counted.
import type { Page } from "playwright-core";
import type { FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";
import { allSaved } from "#test/browser/desk-steps.ts";
import { type Effort, SHAKE_PX } from "#test/tools/tracing-robot/effort.ts";
import { SHARES, type StringToDraw } from "#test/tools/tracing-robot/strings-to-draw.ts";

type Pixel = readonly [number, number];

/**
 * A preview counts when the readout has said the same for so long. The robot waits for a fine one much longer than a person needs
 * to, so that what it does is the same on a busy machine.
 */
const STEADY_MS = 250;
const LONGEST_WAIT_MS = 12_000;
/** Planes that one turn of the wheel goes at most, and the travel of one: as a wheel that is flicked. */
const FLICK_PLANES = 10;
const NOTCH_PX = 110;
/** Below this image fit a person sets a pin nearer by. */
const GOOD_FIT = 0.5;

/** Where the section's plane lies: pixel (x, y) of the page shows corner + x right + y down. */
interface ShownPlane {
  readonly corner: Vec3;
  /** Millimetres a pixel, as vectors. */
  readonly right: Vec3;
  readonly down: Vec3;
  /** Away from the viewer. */
  readonly normal: Vec3;
  /** Planes apart, millimetres. */
  readonly stepMm: number;
}

/** The desk's keys for the two upright planes. */
const PLANE_KEYS = { front: "2", side: "3" } as const;
type UprightPlane = keyof typeof PLANE_KEYS;

export class PageRobot {
  readonly effort: Effort = { clicks: 0, keys: 0, wheelSteps: 0 };
  private shown: UprightPlane = "front";
  private constructor(
    private readonly page: Page,
    private readonly random: SeededRandom,
    /** A pixel of the section, to read its place. */
    private readonly pixel: Pixel,
    private readonly planes: Record<UprightPlane, ShownPlane>,
  ) {}

  /** Looks at the two upright planes: where they lie is read under the pointer. */
  static async on(page: Page, random: SeededRandom): Promise<PageRobot> {
    const box = (await page.locator(".section-view").boundingBox())!;
    const pixel: Pixel = [box.x + 0.15 * box.width, box.y + 0.15 * box.height];
    const side = await lookAtPlane(page, "side", pixel, box);
    const front = await lookAtPlane(page, "front", pixel, box);
    return new PageRobot(page, random, pixel, { front, side });
  }

  /** Shows the upright plane in which a tree lies best, by its key. */
  async showPlaneFor(tree: FileTree): Promise<void> {
    const points = tree.strands.flatMap((strand) => strand.points!);
    const depth = ({ normal }: ShownPlane) => {
      const values = points.map((point) => dot(point, normal));
      return Math.max(...values) - Math.min(...values);
    };
    const best = depth(this.planes.side) < depth(this.planes.front) ? "side" : "front";
    if (best === this.shown) return;
    await this.key(PLANE_KEYS[best]);
    this.shown = best;
    const plane = this.planes[best];
    const at = await placeAt(this.page, this.pixel);
    this.planes[best] = { ...plane, corner: cornerOf(plane, at, this.pixel) };
  }

  /** Draws a string: its beginning (a click, or the key that branches), pins where the guide needs them, and the key of its end. */
  async draw(string: StringToDraw, isBranch: boolean): Promise<void> {
    const { line } = string;
    await this.pointAt(line[0]!);
    if (isBranch) await this.key("b");
    else {
      await this.chooseInDepth();
      await this.click();
    }
    const whole = polylineLength(line);
    for (let from = 0; ; ) {
      let to = whole;
      for (const share of SHARES) {
        to = from + share * (whole - from);
        await this.pointAt(pointAt(line, to));
        await this.chooseInDepth();
        if (await this.guideIsGood()) break;
      }
      if (to === whole) break;
      await this.click();
      from = to;
    }
    await this.key(string.endKey.toLowerCase());
    await allSaved(this.page);
  }

  private async pointAt(place: Vec3): Promise<void> {
    const plane = this.planes[this.shown];
    const { corner, right, down, normal, stepMm } = plane;
    const steps = Math.round(dot(subtract(place, corner), normal) / stepMm);
    await turnWheel(this.page, steps);
    this.effort.wheelSteps += Math.abs(steps);
    const moved = add(corner, scale(normal, steps * stepMm));
    this.planes[this.shown] = { ...plane, corner: moved };
    if (steps !== 0) await this.page.waitForTimeout(STEADY_MS);
    const from = subtract(place, moved);
    const x = dot(from, right) / dot(right, right) + SHAKE_PX * this.random.normal();
    const y = dot(from, down) / dot(down, down) + SHAKE_PX * this.random.normal();
    await this.page.mouse.move(x, y, { steps: 4 });
    await this.page.waitForTimeout(STEADY_MS);
  }

  private async click(): Promise<void> {
    this.effort.clicks++;
    await this.page.mouse.down();
    await this.page.mouse.up();
    await this.page.waitForTimeout(STEADY_MS);
  }

  private async key(key: string): Promise<void> {
    this.effort.keys++;
    await this.page.keyboard.press(key);
    await this.page.waitForTimeout(STEADY_MS);
  }

  /** Takes the next string in depth until the one that lies in the plane looked at is taken, when it is among those there. */
  private async chooseInDepth(): Promise<void> {
    const depths = new Map<number, number>();
    // The readout may lag behind a key, so a number can come twice or not at all: no person would go on for ever.
    for (let keys = 0; keys < MOST_DEPTH_KEYS; keys++) {
      const [, sign, depth, number, count] = /depth ([+−])([\d.]+) mm(?: \((\d+) of (\d+)\))?/.exec(await this.readout()) ?? [];
      if (count === undefined) return;
      const away = Math.abs(Number(`${sign === "−" ? "-" : ""}${depth}`));
      depths.set(Number(number), away);
      // In the plane, or all were seen and this is the nearest.
      if (away <= IN_PLANE_MM || (depths.size === Number(count) && away === Math.min(...depths.values()))) return;
      await this.key("d");
    }
  }

  /** Waits for the guide to this place and tells whether a person would be content with it. */
  private async guideIsGood(): Promise<boolean> {
    const end = performance.now() + LONGEST_WAIT_MS;
    for (let before = ""; ; ) {
      const now = await this.readout();
      const fit = /fit ([\d.]+)/.exec(now)?.[1];
      const isFine = fit !== undefined && !now.includes("(coarse)");
      if ((isFine && now === before) || performance.now() > end)
        return isFine && Number(fit) >= GOOD_FIT && !now.includes("leaves the string");
      before = now;
      await this.page.waitForTimeout(STEADY_MS);
    }
  }

  private async readout(): Promise<string> {
    return (await this.page.locator(".readout").textContent()) ?? "";
  }
}

/** Three strings in depth, each seen twice, are more than any place of a valve holds. */
const MOST_DEPTH_KEYS = 8;
/** A snapped place so near to the plane is that of the string looked at. */
const IN_PLANE_MM = 0.25;

/** Shows a plane and reads where it lies; ten turns of the wheel and back tell how far a step goes, as the readout has two decimals. */
async function lookAtPlane(
  page: Page,
  name: UprightPlane,
  a: Pixel,
  box: { readonly width: number; readonly height: number },
): Promise<ShownPlane> {
  await page.mouse.move(...a);
  await page.keyboard.press(PLANE_KEYS[name]);
  await page.waitForTimeout(1000);
  const b: Pixel = [a[0] + 0.7 * box.width, a[1]];
  const c: Pixel = [a[0], a[1] + 0.7 * box.height];
  const [atA, atB, atC] = [await placeAt(page, a), await placeAt(page, b), await placeAt(page, c)];
  const right = scale(subtract(atB, atA), 1 / (b[0] - a[0]));
  const down = scale(subtract(atC, atA), 1 / (c[1] - a[1]));
  const normal = normalise(cross(right, down));
  const before = await placeAt(page, a);
  await turnWheel(page, 10);
  await page.waitForTimeout(STEADY_MS);
  const moved = subtract(await placeAt(page, a), before);
  await turnWheel(page, -10);
  await page.waitForTimeout(STEADY_MS);
  const stepMm = dot(moved, normal) / 10;
  return { corner: cornerOf({ right, down }, atA, a), right, down, normal, stepMm };
}

/** Where the page's own corner would lie. */
function cornerOf({ right, down }: Pick<ShownPlane, "right" | "down">, at: Vec3, [x, y]: Pixel): Vec3 {
  return subtract(at, add(scale(right, x), scale(down, y)));
}

/** Steps so many planes away from the viewer. */
async function turnWheel(page: Page, planes: number): Promise<void> {
  for (let left = planes; left !== 0; ) {
    const now = Math.sign(left) * Math.min(FLICK_PLANES, Math.abs(left));
    await page.mouse.wheel(0, NOTCH_PX * now);
    left -= now;
  }
}

async function placeAt(page: Page, [x, y]: Pixel): Promise<Vec3> {
  await page.mouse.move(x - 3, y - 3);
  await page.mouse.move(x, y);
  await page.waitForTimeout(300);
  const text = (await page.locator(".readout").textContent()) ?? "";
  const found = /x (-?[\d.]+)\s+y (-?[\d.]+)\s+z (-?[\d.]+) mm/.exec(text);
  if (found === null) throw new Error(`the readout gives no position: ${text}`);
  return [Number(found[1]), Number(found[2]), Number(found[3])];
}
