import { createRequire } from "node:module";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { JobState } from "#shared/api/routes.ts";
import { openTestPage, type TestPage } from "#test/browser/views/open-page.ts";
// @ts-expect-error a plain script without types
import { bringBrowser } from "#test/tools/browser.mjs";

declare const window: { shelf: { asked: { what: string; detail: unknown }[]; job(change: Partial<JobState>): void } };

let pages: TestPage;
beforeAll(async () => {
  pages = await openTestPage(new URL("./page/", import.meta.url), bringBrowser() as string);
});
afterAll(() => pages.close());

const asked = (page: Page, what: string) =>
  page.evaluate((name) => window.shelf.asked.filter((entry) => entry.what === name).map((entry) => entry.detail), what);
const open = async (query = "") => {
  const page = await pages.open(query);
  await page.waitForFunction(() => window.shelf !== undefined);
  return page;
};

/** Serious faults that axe finds, with the places; and controls smaller than 24 px (WCAG 2.2, 2.5.8). */
async function faults(page: Page): Promise<string[]> {
  await page.addScriptTag({ path: createRequire(import.meta.url).resolve("axe-core/axe.min.js") });
  return page.evaluate(async () => {
    const { axe } = window as unknown as {
      axe: { run(where: Document): Promise<{ violations: { id: string; impact: string; nodes: { html: string }[] }[] }> };
    };
    const { violations } = await axe.run(document);
    const found = violations
      .filter(({ impact }) => impact === "serious" || impact === "critical")
      .map((v) => `${v.id}: ${v.nodes[0]!.html}`);
    const small = [...document.querySelectorAll("button, select, input, a")].filter((control) => {
      // A choice is hit by its whole label.
      const target = control.closest("label.scan-choice") ?? control;
      const { width, height } = target.getBoundingClientRect();
      return width > 0 && (width < 24 || height < 24);
    });
    return [...found, ...small.map((control) => `small: ${control.outerHTML.slice(0, 80)}`)];
  });
}

/** Elements whose text is cut off or runs out of its box. */
function cutTexts(page: Page): Promise<string[]> {
  return page.evaluate(() =>
    [...document.querySelectorAll(".shelf *, dialog *")]
      .filter(
        (element) =>
          element.children.length === 0 && element.textContent !== "" && !element.closest(".unseen, select, svg, datalist"),
      )
      .filter((element) => {
        const shown = getComputedStyle(element);
        return (
          shown.display !== "inline" &&
          (element.scrollWidth > element.clientWidth + 1 || element.scrollHeight > element.clientHeight + 4)
        );
      })
      .map((element) => element.outerHTML.slice(0, 100)),
  );
}

test("axe, target sizes and texts are right on the shelf and in every sheet, in both themes", async () => {
  for (const theme of ["dark", "light"]) {
    const page = await open(`?theme=${theme}&problems`);
    await page.getByText("HB-07").first().waitFor();
    await page.evaluate(() => window.shelf.job({ progress: 0.4, step: "Writing level 0", bytesPerSecond: 1e8, secondsLeft: 40 }));
    expect(await faults(page)).toEqual([]);
    expect(await cutTexts(page)).toEqual([]);
    await page.getByRole("button", { name: "New pass on HB-07" }).click();
    expect(await faults(page)).toEqual([]);
    await page.getByRole("button", { name: "Add a scan" }).click();
    expect(await faults(page)).toEqual([]);
    await page.getByRole("button", { name: "Choose …" }).click();
    await page.getByText("Voxel size", { exact: true }).waitFor();
    expect(await faults(page)).toEqual([]);
    expect(await cutTexts(page)).toEqual([]);
    await page.getByRole("button", { name: "Close" }).click();
    await page.getByRole("button", { name: "About" }).click();
    await page.getByText("Nothing leaves this computer").waitFor();
    expect(await faults(page)).toEqual([]);
    await page.context().close();
  }
});

test("a scan is added from the keyboard alone: path, unit, confirmation, taken in", async () => {
  const page = await open("?empty&later");
  await page.getByRole("heading", { name: "The shelf is empty" }).waitFor();
  await page.keyboard.press("Tab");
  await page.keyboard.press("Enter");
  await page.getByRole("dialog").waitFor();
  // The path is the first field after the close button.
  for (
    let k = 0;
    k < 4 && !(await page.getByLabel("Path of the file").evaluate((field) => field === document.activeElement));
    k++
  ) {
    await page.keyboard.press("Tab");
  }
  await page.keyboard.type("/scans/bare.nrrd");
  await page.keyboard.press("Enter");
  const unit = page.getByLabel("Unit of the voxel size");
  await unit.waitFor();
  expect(await page.getByText("The header names no unit of length.").count()).toBe(1);
  for (let k = 0; k < 12 && !(await unit.evaluate((field) => field === document.activeElement)); k++)
    await page.keyboard.press("Tab");
  await page.keyboard.press("ArrowDown");
  expect((await page.locator(".scan-words").textContent())!.replace(/[\u00a0\u202f]/g, " ")).toBe(
    "1 040 × 1 040 × 1 310 voxels of 40 µm: 41.6 × 41.6 × 52.4 mm",
  );
  await page.keyboard.press("Tab");
  await page.keyboard.press("Space");
  // Enter in any field sends the form.
  await page.keyboard.press("Tab");
  await page.keyboard.press("ArrowDown");
  await page.keyboard.press("Enter");
  await expect.poll(() => asked(page, "intake")).toHaveLength(1);
  expect((await asked(page, "intake"))[0]).toMatchObject({
    path: "/scans/bare.nrrd",
    spacing: [0.04, 0.04, 0.04],
    handedness: "confirmed",
  });
  await page.getByRole("dialog").waitFor({ state: "detached" });
  await page.context().close();
});

test("a file that is no scan is told in its sentence, and the path stays to be mended", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: "Add a scan" }).click();
  await page.getByLabel("Path of the file").fill("/scans/wrong.gif");
  await page.keyboard.press("Enter");
  expect(await page.getByRole("alert").textContent()).toContain("expected the magic NRRD0001 to NRRD0006, found 'GIF89a'");
  expect(await page.getByLabel("Path of the file").inputValue()).toBe("/scans/wrong.gif");
  await page.keyboard.press("Escape");
  expect(await page.getByRole("dialog").count()).toBe(0);
  await page.context().close();
});

test("the mirror choice shows the slice as it will be taken in", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: "Add a scan" }).click();
  await page.getByLabel("Path of the file").fill("/scans/a.nrrd");
  await page.keyboard.press("Enter");
  await page.locator(".scan-slice").waitFor();
  const row = () =>
    page.locator(".scan-slice").evaluate((canvas) => {
      const shown = canvas as HTMLCanvasElement;
      const { data } = shown.getContext("2d")!.getImageData(0, 102, shown.width, 1);
      return Array.from({ length: shown.width }, (_, x) => data[4 * x]!);
    });
  const before = await row();
  await page.getByLabel("mirrored: take the slices in reversed order").check();
  await expect.poll(row).toEqual([...before].reverse());
  expect(before).not.toEqual([...before].reverse());
  await page.context().close();
});

test("a new pass asks for the annotator and opens on the desk; Escape takes the question back", async () => {
  const page = await open("?later");
  const button = page.getByRole("button", { name: "New pass on HB-07" });
  await button.click();
  const field = page.getByLabel("Annotator");
  expect(await field.inputValue()).toBe("MK");
  await field.press("Escape");
  expect(await field.count()).toBe(0);
  await expect.poll(() => button.evaluate((element) => element === document.activeElement)).toBe(true);
  await button.press("Enter");
  await field.fill("AN-4");
  await field.press("Enter");
  await expect.poll(() => asked(page, "go")).toEqual([{ screen: "desk", specimen: "a1", pass: "a1-an-4" }]);
  await page.context().close();
});

test("handedness is confirmed on the shelf, but not while the mirror image is the one shown", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: /^Confirm … the handedness of K-112/ }).click();
  const confirm = page.getByRole("button", { name: "Confirm: right as it is" });
  await page.getByText("as it was taken in").waitFor();
  await page.getByLabel("Show the mirror image").check();
  await page.getByText("mirror image", { exact: true }).waitFor();
  expect(await confirm.isDisabled()).toBe(true);
  expect(await faults(page)).toEqual([]);
  await page.getByLabel("Show the mirror image").uncheck();
  await confirm.click();
  await expect.poll(() => asked(page, "change")).toEqual([{ specimen: "b2", patch: { handedness: "confirmed" } }]);
  await page.context().close();
});

test("a specimen with edited passes goes only after its name was typed", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: "Remove … HB-07" }).click();
  const remove = page.getByRole("button", { name: "Remove for good" });
  expect(await remove.isDisabled()).toBe(true);
  await page.getByLabel(/Type the specimen's name/).fill("HB-07");
  await remove.click();
  await expect.poll(() => asked(page, "remove")).toEqual([{ specimen: "a1", force: true }]);
  await expect.poll(() => page.getByRole("heading", { name: "HB-07" }).count()).toBe(0);
  await page.context().close();
});

test("the demo valve is one click, its progress can be stopped, and its row gets the focus when it is there", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: "Open the demo valve" }).click();
  await page.evaluate(() => window.shelf.job({ id: "demo-1", what: "demo", progress: 0.2, step: "Casting strings" }));
  expect(await page.getByRole("progressbar").getAttribute("value")).toBe("20");
  expect(await page.getByRole("button", { name: "Open the demo valve" }).isDisabled()).toBe(true);
  await page.getByRole("button", { name: "Cancel" }).click();
  expect(await asked(page, "cancel")).toEqual(["demo-1"]);
  await page.evaluate(() =>
    window.shelf.job({ id: "demo-1", what: "demo", state: "done", progress: 1, result: { specimen: "a1" } }),
  );
  const button = page.getByRole("button", { name: "New pass on HB-07" });
  await expect.poll(() => button.evaluate((element) => element === document.activeElement)).toBe(true);
  await page.context().close();
});

test("a library that cannot be read says why and can be tried again", async () => {
  const page = await open("?broken&later");
  expect(await page.getByRole("alert").textContent()).toContain("in use by another Tautline");
  expect(await page.getByRole("button", { name: "Try again" }).count()).toBe(1);
  await page.context().close();
});

test("a file dropped in a browser, which hides its path, is asked for by path", async () => {
  const page = await open("?later");
  await page.evaluate(() => {
    const data = new DataTransfer();
    data.items.add(new File(["x"], "mine.nrrd"));
    document
      .querySelector(".shelf")!
      .dispatchEvent(new DragEvent("drop", { dataTransfer: data, bubbles: true, cancelable: true }));
  });
  await page.getByLabel("Path of the file").waitFor();
  expect(await page.getByText("mine.nrrd").count()).toBe(1);
  await page.context().close();
});

test("the first steps stay away once they were put away", async () => {
  const page = await open();
  await page.getByRole("heading", { name: "Three steps to the first tree" }).waitFor();
  expect(await page.getByText(/Not a medical device/).count()).toBe(1);
  await page.getByRole("button", { name: "Put away" }).click();
  await page.reload();
  await page.getByRole("heading", { name: "HB-07" }).waitFor();
  expect(await page.getByRole("heading", { name: "Three steps to the first tree" }).count()).toBe(0);
  await page.context().close();
});

test("studies and assignments stand in rows of their own, with what can be done next, in both themes", async () => {
  for (const query of ["?studies&later", "?studies&later&theme=light"]) {
    const page = await open(query);
    await page.getByRole("heading", { name: /^Harrow Bay agreement/ }).waitFor();
    expect(await faults(page)).toEqual([]);
    expect(await cutTexts(page)).toEqual([]);
    await page.getByText("1 study, 2 assignments").waitFor();
    await page.getByRole("button", { name: "Open assignment K7Q2" }).waitFor();
    await page.getByRole("button", { name: "Open it again to mend it M3XD" }).waitFor();
    await page.getByRole("button", { name: /^Hand it back.*K7Q2/ }).click();
    await page.getByRole("button", { name: "Report of Harrow Bay agreement" }).click();
    expect(await asked(page, "go")).toEqual([
      { screen: "shelf", handBack: "a1" },
      { screen: "study", study: "st1", part: "report" },
    ]);
    await page.context().close();
  }
});

test("a study is put together from the keyboard, and told what is missing", async () => {
  const page = await open("?later");
  await page.getByRole("button", { name: "New study" }).focus();
  await page.keyboard.press("Enter");
  await page.getByRole("heading", { name: "New study" }).waitFor();
  // The first field has the focus.
  await page.keyboard.type("Pilot");
  await page.keyboard.press("Enter");
  await page.getByText("Choose at least one specimen that counts.").waitFor();
  await page.getByText("Name at least one annotator.").waitFor();
  expect(await faults(page)).toEqual([]);
  expect(await cutTexts(page)).toEqual([]);
  await page.keyboard.press("Tab");
  await page.keyboard.press("ArrowDown");
  await page.getByText("1 × 0 × 2: 0 passes that count.").waitFor();
  await page.keyboard.press("Escape");
  await page.getByRole("dialog").waitFor({ state: "detached" });
  expect(await page.getByRole("button", { name: "New study" }).evaluate((button) => button === document.activeElement)).toBe(
    true,
  );
  await page.context().close();
});
