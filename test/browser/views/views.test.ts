import { createRequire } from "node:module";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { openTestPage, type TestPage } from "#test/browser/views/open-page.ts";
// @ts-expect-error a plain script without types
import { bringBrowser } from "#test/tools/browser.mjs";

interface Told {
  readonly what: string;
  readonly detail: {
    at: number[];
    hit: { kind: string; id?: string } | null;
    cancelled?: boolean;
    kind?: string;
    id?: string;
  } & number;
}
interface Views {
  readonly told: Told[];
  readonly section: { readonly size: { width: number; height: number; ratio: number }; dispose(): void };
  readonly space: { readonly available: boolean; dispose(): void };
  readonly strip: { dispose(): void };
  plane(): { centre: number[]; mmPerPx: number };
}
declare const window: { views: Views; frames: number; requestAnimationFrame: (action: FrameRequestCallback) => number };

const folder = new URL("./page/", import.meta.url);
const browserPath = (await bringBrowser()) as string;
let pages: TestPage;

beforeAll(async () => {
  pages = await openTestPage(folder, browserPath);
});
afterAll(() => pages.close());

const told = (page: Page, what: string) =>
  page.evaluate((name) => window.views.told.filter((entry) => entry.what === name), what);
const plane = (page: Page) => page.evaluate(() => window.views.plane());

async function opened(
  query = "",
  scale = 1,
): Promise<{ page: Page; box: { x: number; y: number; width: number; height: number } }> {
  const page = await pages.open(query, { width: 1280, height: 800 }, scale);
  await page.waitForFunction(() => window.views?.section.size.width > 0);
  await page.waitForTimeout(300);
  const box = (await page.locator(".section-view").boundingBox())!;
  return { page, box };
}

test("the picture is shown one device pixel for each of its own, with its very values", async () => {
  for (const scale of [1, 2]) {
    const { page } = await opened("", scale);
    const [same, width, cssWidth] = await page.evaluate(() => {
      const view = window.views.section as unknown as {
        content: { image: { header: { width: number; height: number }; body: Uint8Array } };
        canvases: { layers: HTMLCanvasElement[] };
      };
      const { header, body } = view.content.image;
      const canvas = view.canvases.layers[0]!;
      const shown = canvas.getContext("2d")!.getImageData(0, 0, canvas.width, canvas.height).data;
      let equal = canvas.width === header.width && canvas.height === header.height;
      for (let i = 0; equal && i < body.length; i++) equal = shown[4 * i] === body[i] && shown[4 * i + 3] === 255;
      return [equal, canvas.width, canvas.clientWidth] as const;
    });
    expect(same).toBe(true);
    expect(width).toBe(cssWidth * scale);
    await page.context().close();
  }
});

test("a click tells its place in millimetres and what lies there", async () => {
  const { page, box } = await opened();
  const { centre, mmPerPx } = await plane(page);
  await page.mouse.click(box.x + box.width / 2 + 50, box.y + box.height / 2 - 30);
  const [click] = await told(page, "click");
  // Flat on the scan's axes: x to the right, y downwards.
  expect(click!.detail.at[0]).toBeCloseTo(centre[0]! + 50 * mmPerPx, 2);
  expect(click!.detail.at[1]).toBeCloseTo(centre[1]! - 30 * mmPerPx, 2);
  expect(click!.detail.at[2]).toBeCloseTo(centre[2]!, 9);
  // The strand under way has a pin at (6, 8, 9).
  await page.mouse.click(box.x + box.width / 2 + (6 - centre[0]!) / mmPerPx, box.y + box.height / 2 + (8 - centre[1]!) / mmPerPx);
  expect((await told(page, "click"))[1]!.detail.hit).toMatchObject({ kind: "under-way-pin" });
  await page.context().close();
});

test("the wheel steps whole planes, control-wheel zooms at the pointer, dragging pans", async () => {
  const { page, box } = await opened();
  const before = await plane(page);
  await page.mouse.move(box.x + 100, box.y + 120);
  await page.mouse.wheel(0, 100);
  await page.mouse.wheel(0, 100);
  await expect.poll(async () => (await plane(page)).centre[2]).toBeCloseTo(before.centre[2]! + 2 * 0.04, 9);
  await page.keyboard.down("Control");
  await page.mouse.wheel(0, -100);
  await page.keyboard.up("Control");
  await expect.poll(async () => (await plane(page)).mmPerPx).toBeLessThan(before.mmPerPx);
  const zoomed = await plane(page);
  const under = (p: typeof before) => p.centre[0]! + (100 - box.width / 2) * p.mmPerPx;
  expect(under(zoomed)).toBeCloseTo(under(before), 6);
  // On the bare ground, away from everything that could be grabbed.
  await page.mouse.move(box.x + 30, box.y + 30);
  await page.mouse.down();
  await page.mouse.move(box.x + 70, box.y + 60, { steps: 4 });
  await page.mouse.up();
  const panned = await plane(page);
  expect(panned.centre[0]).toBeCloseTo(zoomed.centre[0]! - 40 * zoomed.mmPerPx, 6);
  expect(panned.centre[1]).toBeCloseTo(zoomed.centre[1]! - 30 * zoomed.mmPerPx, 6);
  expect(await told(page, "click")).toEqual([]);
  await page.context().close();
});

test("a pin is dragged with a start, moves and an end; Escape takes it back", async () => {
  const { page, box } = await opened();
  const { centre, mmPerPx } = await plane(page);
  const pin = { x: box.x + box.width / 2 + (6 - centre[0]!) / mmPerPx, y: box.y + box.height / 2 + (8 - centre[1]!) / mmPerPx };
  await page.mouse.move(pin.x, pin.y);
  await page.mouse.down();
  await page.mouse.move(pin.x + 20, pin.y, { steps: 3 });
  await page.mouse.up();
  const moves = await told(page, "dragMove");
  expect(moves[moves.length - 1]!.detail.at[0]).toBeCloseTo(6 + 20 * mmPerPx, 2);
  expect((await told(page, "dragEnd"))[0]!.detail.cancelled).toBe(false);
  await page.mouse.move(pin.x, pin.y);
  await page.mouse.down();
  await page.mouse.move(pin.x + 20, pin.y, { steps: 3 });
  await page.locator(".section-view").press("Escape");
  await page.mouse.up();
  expect((await told(page, "dragEnd")).map((entry) => entry.detail.cancelled)).toEqual([false, true]);
  expect(await told(page, "pan")).toEqual([]);
  await page.context().close();
});

test("the keyboard cursor starts in the middle, moves by arrows, further with Shift, and Enter clicks there", async () => {
  const { page } = await opened();
  const { centre, mmPerPx } = await plane(page);
  const section = page.locator(".section-view");
  await section.press("ArrowRight");
  await section.press("ArrowRight");
  await section.press("Shift+ArrowDown");
  await section.press("Enter");
  const [click] = await told(page, "click");
  expect(click!.detail.at[0]).toBeCloseTo(centre[0]! + 4 * mmPerPx, 6);
  expect(click!.detail.at[1]).toBeCloseTo(centre[1]! + 32 * mmPerPx, 6);
  // Beyond the pane's edge the picture moves along.
  for (let k = 0; k < 20; k++) await section.press("Shift+ArrowDown");
  expect((await plane(page)).centre[1]).toBeGreaterThan(centre[1]!);
  await page.context().close();
});

test("space: a click picks a strand, dragging and arrow keys turn, and nothing is drawn while nothing changes", async () => {
  const { page } = await opened();
  expect(await page.evaluate(() => window.views.space.available)).toBe(true);
  const box = (await page.locator(".space-view").boundingBox())!;
  const picture = () => page.locator(".space-view").screenshot();
  for (let y = 0.3; y < 0.8; y += 0.02) await page.mouse.click(box.x + box.width * 0.5, box.y + box.height * y);
  const hits = await told(page, "space click");
  expect(hits.some((entry) => entry.detail?.kind === "strand" || entry.detail?.kind === "node")).toBe(true);
  const before = await picture();
  await page.locator(".space-view").press("Shift+ArrowRight");
  await page.waitForTimeout(400);
  expect(before.equals(await picture())).toBe(false);
  const idle = await page.evaluate(async () => {
    let asked = 0;
    const real = window.requestAnimationFrame.bind(window);
    window.requestAnimationFrame = (action) => {
      asked += 1;
      return real(action);
    };
    await new Promise((resolve) => setTimeout(resolve, 600));
    return asked;
  });
  expect(idle).toBe(0);
  await page.context().close();
});

test("strip: a click and keys tell the arc length, upwards is towards the leaflet, the handle turns by keys", async () => {
  const { page } = await opened();
  const stage = page.locator(".strip-stage");
  const box = (await stage.boundingBox())!;
  await page.mouse.click(box.x + 60, box.y + box.height - 40);
  await page.mouse.click(box.x + 60, box.y + 40);
  const [low, high] = (await told(page, "strip place")).map((entry) => Number(entry.detail));
  expect(low).toBeLessThan(1);
  expect(high).toBeGreaterThan(7);
  await stage.press("ArrowDown");
  const places = await told(page, "strip place");
  expect(Number(places[places.length - 1]!.detail)).toBeCloseTo(high! - 0.1, 6);
  await page.locator(".strip-turn input").press("ArrowRight");
  expect(Number((await told(page, "strip turn"))[0]!.detail)).toBe(5);
  await page.context().close();
});

test("axe finds nothing wrong with the panes", async () => {
  for (const theme of ["dark", "light"]) {
    const { page } = await opened(`?theme=${theme}`);
    await page.addScriptTag({ path: createRequire(import.meta.url).resolve("axe-core/axe.min.js") });
    const found = await page.evaluate(async () => {
      const { axe } = window as unknown as {
        axe: { run(where: Document): Promise<{ violations: { id: string; impact: string }[] }> };
      };
      return (await axe.run(document)).violations.filter(({ impact }) => impact === "serious" || impact === "critical");
    });
    expect(found).toEqual([]);
    await page.context().close();
  }
});

test("disposed views leave nothing behind in the page", async () => {
  const { page } = await opened();
  const left = await page.evaluate(() => {
    for (const view of [window.views.section, window.views.space, window.views.strip]) view.dispose();
    return document.querySelectorAll("canvas").length;
  });
  expect(left).toBe(0);
  await page.context().close();
});

test("without WebGL the view in space says so in a sentence, and the other panes work", async () => {
  const bare = await openTestPage(folder, browserPath, ["--disable-3d-apis"]);
  try {
    const page = await bare.open();
    await page.waitForFunction(() => window.views?.section.size.width > 0);
    expect(await page.locator(".space-view").textContent()).toContain("no WebGL");
    const box = (await page.locator(".section-view").boundingBox())!;
    await page.mouse.click(box.x + 80, box.y + 80);
    expect(await told(page, "click")).toHaveLength(1);
  } finally {
    await bare.close();
  }
});
