import type { Page } from "playwright-core";

/** What a person reads on the head line. */
export interface HeadLine {
  readonly edits: number;
  readonly trees: number;
  readonly open: number;
}

export async function headLine(page: Page): Promise<HeadLine> {
  const counts = (await page.locator(".counts").textContent()) ?? "";
  const saved = (await page.locator(".saved-state .figures").textContent()) ?? "";
  const number = (text: string, pattern: RegExp) => Number((pattern.exec(text)?.[1] ?? "NaN").replace(/\s/g, ""));
  return {
    edits: number(saved, /([\d\s]+) edits?/),
    trees: number(counts, /([\d\s]+) trees?/),
    open: number(counts, /(\d+) open/),
  };
}

/** Time within which a key just pressed shows on the head line that there is something to save. */
const BEGUN_MS = 400;

/**
 * Waits until every edit asked for is made and on disk, as the head line says it. It is asked twice, each time after a
 * moment: right after a key the head line still speaks of the edits before it.
 */
export async function allSaved(page: Page): Promise<void> {
  for (let round = 0; round < 2; round++) {
    await page.waitForTimeout(BEGUN_MS);
    await page.waitForFunction(
      () => /^saved( \d\d:\d\d:\d\d)?[\d\s]+edits?$/.test(document.querySelector(".saved-state")?.textContent?.trim() ?? ""),
      undefined,
      { timeout: 60_000 },
    );
  }
}

/** Takes the scan in through the shelf's own sheet and confirms its voxel size. */
export async function addScan(page: Page, path: string): Promise<void> {
  await page.getByRole("button", { name: "Add a scan", exact: true }).first().click();
  await page.getByLabel("Path of the file or folder").fill(path);
  await page.getByRole("button", { name: "Look at it" }).click();
  await page.getByLabel("right as the file has it").check();
  const checked = page.getByLabel("I have checked that this voxel size is right");
  if (await checked.isVisible()) await checked.check();
  await page.getByRole("button", { name: "Take it in" }).click();
}

/** Starts a pass on the only specimen of the shelf; the desk is open then. */
export async function startPass(page: Page, annotator: string): Promise<void> {
  await page.getByRole("button", { name: /^New pass/ }).click({ timeout: 60_000 });
  await page.getByLabel("Annotator").fill(annotator);
  await page.getByRole("button", { name: "Start the pass" }).click();
  await deskReady(page);
}

/** The desk shows its section's picture. */
export async function deskReady(page: Page): Promise<void> {
  await page.locator(".section-view canvas").first().waitFor({ timeout: 60_000 });
  await page.locator(".saved-state").waitFor();
  await page.waitForTimeout(1500);
}

/** Exports the tree file and gives where the browser put it. */
export async function exportTreeFile(page: Page, to: string): Promise<void> {
  await page.keyboard.press("Control+e");
  const download = page.waitForEvent("download");
  await page.getByRole("button", { name: "Export", exact: true }).click();
  await (await download).saveAs(to);
}
