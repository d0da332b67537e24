import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

describe("the demo study", () => {
  let program: RunningProgram;
  let open: OpenPage;

  beforeAll(async () => {
    program = await startProgram();
    open = await openPage(program.url, join(program.folder, "profile"));
  });
  afterAll(async () => {
    await open?.close();
    await program?.stop();
  });

  it("opens with one click, says how far it is, and ends in its report", async () => {
    const { page } = open;
    await page.getByRole("button", { name: "Open the demo study" }).click();
    await page.getByRole("heading", { name: "Making the demo study" }).waitFor();
    await page.getByRole("progressbar", { name: /^Making the demo study/ }).waitFor();
    await page.locator(".report-view").waitFor({ timeout: 420_000 });
    // Five specimens, three annotators, two passes each.
    const totals = page.getByRole("table", { name: "Totals of each pass" });
    expect(await totals.locator("tbody tr").count()).toBe(30);
    await page.getByText(/^Synthetic: at least one of these specimens/).waitFor();
    // Thirty passes are much for a machine that does other things besides.
  }, 450_000);

  it("shows the report's sections by their contents, and space can be turned by keys", async () => {
    const { page } = open;
    await page.getByRole("button", { name: "Where in space annotators differ" }).click();
    const where = page.locator("#report-where");
    expect(await where.evaluate((section) => section === document.activeElement)).toBe(true);
    const space = page.locator(".spread-host");
    await space.scrollIntoViewIfNeeded();
    await page.waitForTimeout(1000);
    const before = await space.screenshot();
    await space.locator("[tabindex='0']").first().focus();
    for (let k = 0; k < 6; k++) await page.keyboard.press("ArrowLeft");
    await expect.poll(async () => (await space.screenshot()).equals(before)).toBe(false);
    expect(await seriousViolations(page)).toEqual([]);
  });

  it("has every pass back in the grid, which the arrow keys walk through", async () => {
    const { page } = open;
    await page.getByRole("tab", { name: "Passes" }).click();
    const cells = page.locator(".pass-cell");
    expect(await cells.count()).toBe(30);
    await cells.first().focus();
    for (const key of ["ArrowDown", "ArrowRight", "Enter"]) await page.keyboard.press(key);
    // Second row, second column: six cells a row.
    expect(await cells.nth(7).getAttribute("aria-pressed")).toBe("true");
    await page.getByRole("heading", { name: "HB-08, AN-1, pass 2" }).waitFor();
    expect(open.faults).toEqual([]);
  });
});
