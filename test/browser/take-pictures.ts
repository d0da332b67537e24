import { mkdir } from "node:fs/promises";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { deskReady, startPass } from "#test/browser/desk-steps.ts";
import { openPage, startProgram } from "#test/browser/running-program.ts";

/** A long time for a slow machine; every wait ends as soon as there is something to see. */
const PATIENCE_MS = 120_000;

/** Takes the pictures of the README into `folder`: the shelf, side by side, the desk in both themes and sizes, and tracing under way. */
export async function takePictures(folder: string, say: (line: string) => void): Promise<void> {
  await mkdir(folder, { recursive: true });
  const program = await startProgram();
  const { page, close } = await openPage(program.url, join(program.folder, "profile"));
  const picture = async (name: string) => {
    await page.mouse.move(5, 5);
    await settled(page);
    await page.screenshot({ path: join(folder, `${name}.png`) });
    say(`${name}.png`);
  };
  try {
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    const first = page.getByRole("button", { name: /^Open AN-1/ });
    await first.waitFor({ timeout: PATIENCE_MS });
    await picture("shelf");
    await sideBySide(page);
    await picture("side-by-side");
    await page.getByRole("button", { name: "shelf", exact: true }).click();
    await first.click();
    await deskReady(page);
    await page.getByText("ALPM-07", { exact: true }).first().click();
    await picture("desk");
    await page.setViewportSize({ width: 1920, height: 1080 });
    await picture("desk-large");
    await page.setViewportSize({ width: 1280, height: 800 });
    await page.getByRole("button", { name: "light", exact: true }).click();
    await picture("desk-light");
    await page.getByRole("button", { name: "dark", exact: true }).click();
    await page
      .getByRole("link", { name: "shelf" })
      .or(page.getByRole("button", { name: "shelf" }))
      .first()
      .click();
    await startPass(page, "AN-4");
    await traceOneString(page);
    await settled(page);
    await page.screenshot({ path: join(folder, "tracing.png") });
    say("tracing.png");
    await demoStudy(page, picture);
  } finally {
    await close();
    await program.stop();
  }
}

/** Compares the first two passes and goes to the second difference. */
async function sideBySide(page: Page): Promise<void> {
  await page.getByRole("button", { name: /^Side by side/ }).click();
  await page.getByRole("button", { name: "Compare", exact: true }).click();
  await page.locator(".difference-row").first().waitFor({ timeout: PATIENCE_MS });
  for (let k = 0; k < 2; k++) await page.keyboard.press("q");
}

/** The demo study's passes, and its report where it says in space how far annotators differ. */
async function demoStudy(page: Page, picture: (name: string) => Promise<void>): Promise<void> {
  await page
    .getByRole("link", { name: "shelf" })
    .or(page.getByRole("button", { name: "shelf" }))
    .first()
    .click();
  await page.getByRole("button", { name: "Open the demo study" }).first().click();
  await page.locator(".report-view").waitFor({ timeout: 5 * PATIENCE_MS });
  await page.getByRole("button", { name: "Totals of each specimen" }).click();
  await picture("study-report");
  await page.getByRole("tab", { name: "Passes" }).click();
  await page.locator(".pass-cell").first().click();
  await picture("study");
}

/** Nothing on the page is waiting any more, as far as can be seen. */
async function settled(page: Page): Promise<void> {
  await page.waitForTimeout(5000);
}

/** Clicks twice along a string in the front plane and leaves the guide under the pointer. */
async function traceOneString(page: Page): Promise<void> {
  await page.getByRole("button", { name: "front", exact: true }).click();
  await page.waitForTimeout(3000);
  const box = (await page.locator(".section-view").boundingBox())!;
  const at = (x: number, y: number) => [box.x + box.width * x, box.y + box.height * y] as const;
  await page.mouse.click(...at(0.263, 0.67));
  await page.waitForTimeout(3000);
  await page.mouse.click(...at(0.255, 0.54));
  await page.waitForTimeout(3000);
  await page.mouse.move(...at(0.244, 0.4), { steps: 8 });
  await page.waitForTimeout(3000);
}
