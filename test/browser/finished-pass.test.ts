import { join } from "node:path";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { allSaved, deskReady, headLine } from "#test/browser/desk-steps.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

/** The pass's trees as the head line says them, and the banner of the playback. */
const counts = async (page: Page) => (await page.locator(".counts").textContent())!;
const words = async (page: Page) => (await page.locator(".playback-words").textContent())!;

describe("a finished pass of the demo valve", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let page: Page;

  beforeAll(async () => {
    program = await startProgram();
    open = await openPage(program.url, join(program.folder, "profile"));
    page = open.page;
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    await page.getByRole("button", { name: /^Open AN-1/ }).click({ timeout: 300_000 });
    await deskReady(page);
  });
  afterAll(async () => {
    expect(open?.faults).toEqual([]);
    await open?.close();
    await program?.stop();
  });

  it("opens for looking only: clicks and keys change nothing", async () => {
    await page.locator(".finished-banner").waitFor();
    const before = await headLine(page);
    const box = (await page.locator(".section-view").boundingBox())!;
    await page.mouse.click(box.x + 60, box.y + 60);
    await page.keyboard.press("Control+z");
    await page.waitForTimeout(500);
    expect(await headLine(page)).toEqual(before);
  });

  /** Keys pressed while a sheet still closes belong to the sheet: the next key waits until it is gone. */
  async function closeSheet() {
    await page.keyboard.press("Escape");
    await page.locator("dialog[open]").waitFor({ state: "detached" });
  }

  it("is worked on again by its button; a radius set at a place on the strip can be undone", async () => {
    await page.getByRole("button", { name: "Work on it again" }).click();
    await page.locator(".finished-banner").waitFor({ state: "detached" });
    await allSaved(page);
    const before = await headLine(page);
    const trees = await counts(page);
    await page.getByText("ALPM-07", { exact: true }).first().click();
    // A click on the strip, and the radius at the place clicked on.
    const strip = (await page.locator(".strip-stage").boundingBox())!;
    await page.mouse.click(strip.x + 50, strip.y + strip.height / 2);
    await page.keyboard.press("Shift+W");
    await page.getByLabel("Radius, mm").waitFor();
    expect(await seriousViolations(page)).toEqual([]);
    const now = page.locator(".radius-form p").first();
    // The strand is 6.9 mm long; the middle of the strip is the middle of the strand.
    const arcMm = Number(/, ([\d.]+) mm from its lower end/.exec((await now.textContent())!)![1]);
    expect(Math.abs(arcMm - 3.45)).toBeLessThan(0.3);
    await page.getByLabel("Radius, mm").fill("1.25");
    await page.getByRole("button", { name: "Set the radius", exact: true }).click();
    await page.waitForFunction(
      (edits) => !document.querySelector(".saved-state")?.textContent?.includes(`${edits} edit`),
      before.edits,
    );
    await allSaved(page);
    expect((await headLine(page)).edits).toBe(before.edits + 1);
    expect(await counts(page)).toBe(trees);
    await page.keyboard.press("Shift+W");
    expect(await now.textContent()).toContain("Now 1.25 mm");
    await closeSheet();
    await page.keyboard.press("Control+z");
    // The undo is carried out in its turn: the sheet is opened anew until it tells of it.
    const radiusNow = async () => {
      await page.keyboard.press("Shift+W");
      const text = await now.textContent();
      await closeSheet();
      return text;
    };
    await expect.poll(radiusNow, { timeout: 20_000, interval: 500 }).not.toContain("1.25");
    await allSaved(page);
  });

  it("plays its history back, by itself, by keys and from a chosen edit, and ends where it was", async () => {
    for (const name of ["T-1", "T-2", "T-3"]) {
      await page.keyboard.press("F2");
      await page.getByLabel("Name of the tree").fill(name);
      await page.keyboard.press("Enter");
      await page.locator("dialog[open]").waitFor({ state: "detached" });
    }
    await allSaved(page);
    const before = await headLine(page);
    await page.keyboard.press("Shift+H");
    const shownName = (name: string) => page.locator(".tree-row").getByText(name, { exact: true });
    const last = page.getByRole("button", { name: /^Play back from / }).first();
    const total = Number(/of (\d+)/.exec(await played(last))![1]);
    // The tree file taken in, and the three names; the radius was taken back, and is on an undone branch.
    expect(total).toBeGreaterThan(3);
    await shownName("T-3").waitFor();
    await page.keyboard.press("<");
    await shownName("T-2").waitFor();
    expect(await words(page)).toContain(`Edit ${total - 1} of ${total}`);
    await page.keyboard.press("Escape");
    await page.locator(".playback-bar").waitFor({ state: "detached" });
    expect(await headLine(page)).toEqual(before);
    await shownName("T-3").waitFor();

    await page.keyboard.press("Shift+B");
    await page.waitForFunction(() => /Edit [2-9]\d* of/.test(document.querySelector(".playback-words")?.textContent ?? ""));
    await page.keyboard.press("Shift+B");
    const resting = await words(page);
    await page.waitForTimeout(1500);
    expect(await words(page)).toBe(resting);
    await page.keyboard.press("Escape");
    expect(await headLine(page)).toEqual(before);
  });

  async function played(from: ReturnType<Page["locator"]>): Promise<string> {
    await from.click();
    return words(page);
  }

  it("does not go on by itself where less motion is asked for", async () => {
    await page.emulateMedia({ reducedMotion: "reduce" });
    await page.keyboard.press("Shift+B");
    const first = await words(page);
    expect(first).toContain("Edit 1 of");
    await page.waitForTimeout(1500);
    expect(await words(page)).toBe(first);
    await page.keyboard.press("Escape");
    await page.emulateMedia({ reducedMotion: "no-preference" });
    await page.keyboard.press("Shift+H");
  });
});
