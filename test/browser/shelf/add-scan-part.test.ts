import type { Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { openTestPage, type TestPage } from "#test/browser/views/open-page.ts";
// @ts-expect-error a plain script without types
import { bringBrowser } from "#test/tools/browser.mjs";

declare const window: { shelf: { asked: { what: string; detail: unknown }[] } };

let pages: TestPage;
beforeAll(async () => {
  pages = await openTestPage(new URL("./page/", import.meta.url), bringBrowser() as string);
});
afterAll(() => pages.close());

const asked = (page: Page, what: string) =>
  page.evaluate((name) => window.shelf.asked.filter((entry) => entry.what === name).map((entry) => entry.detail), what);

/** The sheet over a made-up scan of 1040 x 1040 x 1310 voxels. */
async function sheet(path: string, query = "?later", size = { width: 1280, height: 800 }): Promise<Page> {
  const page = await pages.open(query, size);
  await page.getByRole("button", { name: "Add a scan" }).first().click();
  await page.getByLabel("Path of the file").fill(path);
  await page.keyboard.press("Enter");
  await page.getByText("How much of it").waitFor();
  return page;
}

const edges = (page: Page) =>
  page.getByLabel(/^Box, /).evaluateAll((fields) => fields.map((field) => Number((field as HTMLInputElement).value)));
const plain = (text: string | null) => text!.replace(/[\u00a0\u202f]/g, " ");

test("a box is typed and the scan halved from the keyboard; size and bytes follow; both are sent", async () => {
  const page = await sheet("/scans/a.nrrd");
  const words = async () => plain(await page.locator("fieldset", { hasText: "How it is kept" }).textContent());
  // In whole bricks of 32 voxels of (at most) 4 bytes: 33 x 33 x 41, then 17 x 17 x 21, 9 x 9 x 11, 5 x 5 x 6 ...: 5.85 + 0.80 +
  // 0.12 + 0.02 GB.
  expect(await words()).toContain("1 040 × 1 040 × 1 310 voxels of 40 µm: 41.6 × 41.6 × 52.4 mm");
  expect(await words()).toContain("at most 6.8 GB on disk");
  await page.getByLabel("only a box of it").focus();
  await page.keyboard.press("Space");
  await page.keyboard.press("Tab");
  await page.keyboard.press("Control+a");
  await page.keyboard.type("240");
  await page.getByLabel("Box, z to").focus();
  await page.keyboard.press("ArrowDown");
  expect(await edges(page)).toEqual([240, 1040, 0, 1040, 0, 1309]);
  await page.getByLabel("half as fine").focus();
  await page.keyboard.press("Space");
  expect(await words()).toContain("400 × 520 × 655 voxels of 80 µm: 32.0 × 41.6 × 52.4 mm");
  await page.getByRole("button", { name: "Take it in" }).click();
  await expect.poll(() => asked(page, "intake")).toHaveLength(1);
  expect((await asked(page, "intake"))[0]).toMatchObject({ region: { crop: [240, 0, 0, 1040, 1040, 1309], bin: 2 } });
  await page.context().close();
});

test("a box is drawn on three projections, moved, and its sides are dragged", async () => {
  const page = await sheet("/scans/a.nrrd");
  await page.getByLabel("only a box of it").check();
  await page.getByText("124 of 1 310 slices").waitFor();
  expect(await asked(page, "projections")).toEqual([{ path: "/scans/a.nrrd", polarity: "bright" }]);
  const pictures = page.locator(".part-frame svg");
  expect(await pictures.count()).toBe(3);
  const drag = async (n: number, from: [number, number], to: [number, number]) => {
    await pictures.nth(n).scrollIntoViewIfNeeded();
    const box = (await pictures.nth(n).boundingBox())!;
    const at = ([x, y]: [number, number]) => [box.x + x * box.width, box.y + y * box.height] as const;
    await page.mouse.move(...at(from));
    await page.mouse.down();
    await page.mouse.move(...at([(from[0] + to[0]) / 2, (from[1] + to[1]) / 2]));
    await page.mouse.move(...at(to));
    await page.mouse.up();
  };
  // One page pixel is 7 voxels here (1310 voxels on 188 pixels).
  const near = async (expected: number[]) => {
    const found = await edges(page);
    expected.forEach((edge, k) => {
      expect(Math.abs(found[k]! - edge), `edge ${k}: ${found}`).toBeLessThanOrEqual(14);
    });
  };
  await drag(0, [0.25, 0.5], [0.75, 0.875]);
  await near([260, 780, 520, 910, 0, 1310]);
  // Along y: the lower side of the box goes up.
  await drag(1, [0.5, 0.99], [0.5, 0.5]);
  await near([260, 780, 520, 910, 0, 655]);
  // Along x: the whole box goes down and to the left.
  await drag(2, [0.7, 0.25], [0.45, 0.5]);
  await near([260, 780, 260, 650, 327, 982]);
  await page.getByRole("button", { name: "Box round all" }).click();
  expect(await edges(page)).toEqual([0, 1040, 0, 1040, 0, 1310]);
  await page.context().close();
});

test("a long look tells how far it is and can be stopped; the numbers can be typed without it", async () => {
  const page = await sheet("/scans/slow.nrrd");
  await page.getByLabel("only a box of it").check();
  await expect.poll(() => page.getByLabel("Looking through the scan").getAttribute("value")).toBe("40");
  await page.getByRole("button", { name: "Stop looking" }).click();
  await expect.poll(() => asked(page, "cancel")).toEqual(["look-1"]);
  await page.getByText("the numbers can be typed without them").waitFor();
  await page.getByLabel("Box, x to").fill("2000");
  expect(await page.getByRole("alert").textContent()).toContain("edges from 0 to 1040 along x, found 0 to 2000");
  await page.getByRole("button", { name: "Take it in" }).click();
  expect(await asked(page, "intake")).toEqual([]);
  await page.context().close();
});

test("of several channels one has to be chosen, and the look follows the choice", async () => {
  const page = await sheet("/scans/several.zarr");
  await page.getByRole("button", { name: "Take it in" }).click();
  await page.getByText("Choose which of the scan's volumes is taken in.").waitFor();
  await page.getByLabel("Channel (1 to 3)").selectOption("2");
  await expect
    .poll(() => asked(page, "look"))
    .toEqual([{ path: "/scans/several.zarr" }, { path: "/scans/several.zarr", channel: 1 }]);
  await page.getByRole("button", { name: "Take it in" }).click();
  await expect.poll(() => asked(page, "intake")).toHaveLength(1);
  expect((await asked(page, "intake"))[0]).toMatchObject({ channel: 1 });
  await page.context().close();
});

test("a packed copy shows what it gains and costs once it is measured; a store in place says what it needs", async () => {
  const page = await sheet("/scans/store.zarr");
  await page.getByLabel("as a packed copy").check();
  await page.getByRole("button", { name: "Measure it" }).click();
  await page.getByText("71 % of the plain copy").waitFor();
  await page.getByLabel("where it lies").check();
  await page.getByText("It has to stay there unchanged").waitFor();
  await page.getByLabel("half as fine").check();
  expect(await page.getByLabel("where it lies").isDisabled()).toBe(true);
  await page.getByLabel("half as fine").uncheck();
  await page.getByRole("button", { name: "Take it in" }).click();
  await expect.poll(() => asked(page, "intake")).toHaveLength(1);
  expect((await asked(page, "intake"))[0]).toMatchObject({ keep: "in-place" });
  await page.context().close();
  const other = await sheet("/scans/zstd.zarr");
  expect(await other.getByLabel("where it lies").isDisabled()).toBe(true);
  await other.getByText("packed with zstd").waitFor();
  await other.context().close();
});

/** Parts of the form that lie over each other, run out of it, or are smaller than 24 px (WCAG 2.2, 2.5.8). */
function faultsOfLayout(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    const form = document.querySelector(".scan-form")!.getBoundingClientRect();
    const parts = [...document.querySelectorAll(".scan-form :is(input, select, button, .part-frame)")].map((part) => {
      // A choice is hit by its whole label.
      const target = part.closest("label.scan-choice") ?? part;
      return { name: target.outerHTML.slice(0, 60), box: target.getBoundingClientRect() };
    });
    const faults: string[] = [];
    for (const [n, { name, box }] of parts.entries()) {
      if (box.left < form.left - 1 || box.right > form.right + 1) faults.push(`out of the form: ${name}`);
      if (box.width < 24 || box.height < 24) faults.push(`small: ${name}`);
      for (const other of parts.slice(n + 1)) {
        const across = Math.min(box.right, other.box.right) - Math.max(box.left, other.box.left);
        const down = Math.min(box.bottom, other.box.bottom) - Math.max(box.top, other.box.top);
        if (across > 1 && down > 1) faults.push(`over each other: ${name} and ${other.name}`);
      }
    }
    return faults;
  });
}

test("everything open at once is right by axe, and nothing lies over anything, in both themes and sizes", async () => {
  for (const [theme, width, height] of [
    ["dark", 1280, 800],
    ["light", 1920, 1080],
  ] as const) {
    const page = await sheet("/scans/several-store.zarr", `?later&theme=${theme}`, { width, height });
    await page.getByLabel("only a box of it").check();
    await page.getByText("124 of 1 310 slices").waitFor();
    await page.getByLabel("Box, x to").fill("2000");
    await page.getByRole("alert").waitFor();
    await page.getByLabel("as a packed copy").check();
    expect(await seriousViolations(page)).toEqual([]);
    expect(await faultsOfLayout(page)).toEqual([]);
    await page.context().close();
  }
});
