import type { Page } from "playwright-core";

/**
 * Makes a study of the specimens named, and freezes its protocol; the grid of passes is open then.
 * @param still PNG that shows where an origin is set.
 */
export async function makeFrozenStudy(
  page: Page,
  name: string,
  specimens: readonly string[],
  annotators: readonly string[],
  still: Uint8Array,
): Promise<void> {
  await page.getByRole("button", { name: "New study" }).click();
  await page.getByLabel("Name of the study").fill(name);
  for (const specimen of specimens)
    await page.locator(".part-row", { hasText: specimen }).locator("select").selectOption("counted");
  await page.getByLabel("Annotators, a name a line").fill(annotators.join("\n"));
  await page.getByLabel("Passes of each annotator over each specimen").fill("1");
  await page.getByRole("button", { name: "Make the study" }).click();
  await page
    .getByLabel("Still picture for the origin (PNG)")
    .setInputFiles({ name: "origin.png", mimeType: "image/png", buffer: Buffer.from(still) });
  await page.getByRole("img", { name: "Still picture: origin" }).waitFor();
  await page.getByLabel("Primary quantity").selectOption("total length");
  await page.getByText("saved", { exact: true }).waitFor();
  await page.getByRole("button", { name: "Freeze it" }).click();
  await page.getByRole("button", { name: "Freeze version 1" }).click();
  await page.locator(".pass-cell").first().waitFor();
}

/** Makes the packets that are ready, as folders; the paths that the program names. */
export async function makePackets(page: Page, folder: string): Promise<string[]> {
  await page.getByRole("button", { name: "Make packets" }).click();
  await page.getByLabel("Folder to write into").fill(folder);
  await page.getByLabel("Written as").selectOption("folder");
  await page.getByRole("button", { name: /^Make \d+.packets?$/ }).click();
  await page.getByRole("button", { name: "Done" }).waitFor({ timeout: 60_000 });
  const paths = await page.locator(".packet-path").allTextContents();
  await page.getByRole("button", { name: "Done" }).click();
  return paths;
}

/** Looks at a packet and has it verified; the sheet then shows what came of it. */
export async function takeIn(page: Page, path: string, allowOpenEnds = false): Promise<void> {
  await page.getByRole("button", { name: "Take in a packet" }).first().click();
  await page.getByLabel("Path of the packet").fill(path);
  await page.getByRole("button", { name: "Look at it", exact: true }).click();
  await page.getByText(/^This is/).waitFor();
  if (allowOpenEnds) await page.getByLabel(/^Take it even when ends/).check();
  await page.getByRole("button", { name: "Verify and take it in" }).click();
}

/** The sentence with which a packet is refused, at the first look or when it is verified; the sheet is closed again. */
export async function refusalOf(page: Page, path: string): Promise<string> {
  await page.getByRole("button", { name: "Take in a packet" }).first().click();
  await page.getByLabel("Path of the packet").fill(path);
  await page.getByRole("button", { name: "Look at it", exact: true }).click();
  const refusal = page.locator("dialog .study-refusal");
  await refusal
    .or(page.getByText(/^This is/))
    .first()
    .waitFor();
  if (!(await refusal.isVisible())) {
    await page.getByRole("button", { name: "Verify and take it in" }).click();
    await refusal.waitFor({ timeout: 30_000 });
  }
  const sentence = (await refusal.textContent()) ?? "";
  await page.keyboard.press("Escape");
  await page.locator("dialog[open]").waitFor({ state: "detached" });
  return sentence.trim();
}

/** Writes the pass of the assignment whose hand-back sheet is open as a folder; the packet's path. */
export async function writeReturn(page: Page, folder: string, anyway = false): Promise<string> {
  await page.getByLabel("Folder to write into").fill(folder);
  await page.getByLabel("Written as").selectOption("folder");
  await page.getByLabel(/^Sign it/).uncheck();
  if (anyway) await page.getByLabel("The study lead has agreed to take it with open ends").check();
  await page.getByRole("button", { name: "Hand it back", exact: true }).click();
  await page.getByRole("heading", { name: "Handed back", exact: true }).waitFor({ timeout: 60_000 });
  const path = (await page.locator(".packet-path").textContent())!;
  await page.getByRole("button", { name: "Done" }).click();
  return path;
}
