import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { deskReady } from "#test/browser/desk-steps.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

describe("accessibility of shelf and desk", () => {
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

  const inBothThemes = async (check: (theme: string) => Promise<void>) => {
    for (const theme of ["dark", "light"]) {
      await open.page.evaluate((name) => {
        document.documentElement.dataset.theme = name;
      }, theme);
      await check(theme);
    }
  };

  it("finds no serious violation on the empty shelf, in both themes", async () => {
    await open.page.getByRole("button", { name: "Add a scan", exact: true }).waitFor();
    await inBothThemes(async (theme) => expect(await seriousViolations(open.page), theme).toEqual([]));
  });

  it("finds none on the shelf with the demo valve", async () => {
    const { page } = open;
    await page.getByRole("button", { name: "Open the demo valve", exact: true }).click();
    await page.getByRole("button", { name: /^New pass/ }).waitFor({ timeout: 120_000 });
    await inBothThemes(async (theme) => expect(await seriousViolations(page), theme).toEqual([]));
  });

  it("finds none on the desk: trees, findings, history, and each sheet", async () => {
    const { page } = open;
    await page.getByRole("button", { name: /^Open.*AN-1, pass 1/ }).click();
    await deskReady(page);
    // The demo's passes are finished: they open for looking only.
    await inBothThemes(async (theme) => expect(await seriousViolations(page), `finished, ${theme}`).toEqual([]));
    await page.keyboard.press("Shift+B");
    await page.locator(".playback-bar").waitFor();
    await page.keyboard.press("Shift+B");
    await inBothThemes(async (theme) => expect(await seriousViolations(page), `play back, ${theme}`).toEqual([]));
    await page.keyboard.press("Escape");
    await page.getByRole("button", { name: "Work on it again" }).click();
    await page.locator(".finished-banner").waitFor({ state: "detached" });
    await page.locator(".tree-row").first().click();
    await inBothThemes(async (theme) => expect(await seriousViolations(page), `trees, ${theme}`).toEqual([]));
    await page.getByRole("tab", { name: /^Findings/ }).click();
    await page.keyboard.press("Shift+H");
    await page.locator(".history-drawer").waitFor();
    await inBothThemes(async (theme) => expect(await seriousViolations(page), `history, ${theme}`).toEqual([]));
    for (const key of ["?", "Control+k", "Control+e", "Control+o", "Shift+U"]) {
      await page.locator(".section-view").focus();
      await page.keyboard.press(key);
      await page.locator("dialog[open]").waitFor();
      await inBothThemes(async (theme) => expect(await seriousViolations(page), `${key}, ${theme}`).toEqual([]));
      await page.keyboard.press("Escape");
      await page.locator("dialog[open]").waitFor({ state: "detached" });
    }
  });
});
