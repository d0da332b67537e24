import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { Comparison } from "#shared/compare/comparison.ts";
import { differenceGroups } from "#shared/compare/differences.ts";
import { PassHistory } from "#shared/log/history.ts";
import { plainFromDocument } from "#shared/trees/plain-from-document.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";

/** The passes of the only specimen of a library by annotator, from their journals on disk, and its voxel spacing. */
async function passesOnDisk(library: string): Promise<{ sets: Map<string, PlainSet>; spacing: number[] }> {
  const [specimen] = await readdir(join(library, "specimens"));
  const folder = join(library, "specimens", specimen!);
  const record = JSON.parse(await readFile(join(folder, "specimen.json"), "utf8")) as { volume: { spacing: number[] } };
  const sets = new Map<string, PlainSet>();
  for (const pass of await readdir(join(folder, "passes"))) {
    const lines = (await readFile(join(folder, "passes", pass, "journal.jsonl"), "utf8"))
      .split("\n")
      .filter((line) => line !== "");
    const history = PassHistory.fromLines(lines);
    sets.set(history.header.annotator, plainFromDocument(history.document));
  }
  return { sets, spacing: record.volume.spacing };
}

describe("two passes of the demo valve side by side", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let expected: Comparison;
  let sets: Map<string, PlainSet>;

  beforeAll(async () => {
    program = await startProgram();
    open = await openPage(program.url, join(program.folder, "profile"));
    const { page } = open;
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    await page.getByRole("button", { name: /^Side by side/ }).click({ timeout: 110_000 });
    const found = await passesOnDisk(program.library);
    sets = found.sets;
    const options = {
      preset: "geometry",
      origin: "held",
      positionScale: 2,
      merge: 0.3,
      tolerance: 0.5,
      minimumDiameter: null,
      step: Math.min(...found.spacing) / 2,
    } as const;
    expected = compareSets(sets.get("AN-1")!, sets.get("AN-2")!, options, () => 60_000);
    await page.getByLabel("A, the reference").selectOption({ label: "AN-1, pass 1" });
    await page.getByLabel("B, held against it").selectOption({ label: "AN-2, pass 1" });
    await page.getByRole("button", { name: "Compare", exact: true }).click();
    await page.locator(".difference-row").first().waitFor({ timeout: 60_000 });
  });
  afterAll(async () => {
    await open?.close();
    await program?.stop();
  });

  it("lists what the comparison finds, in its order, with the whole set's numbers", async () => {
    const { page } = open;
    const all = differenceGroups(expected, sets.get("AN-1")!, sets.get("AN-2")!).flatMap((group) => group.differences);
    const shown = await page
      .locator(".difference-row")
      .evaluateAll((rows) => rows.map((row) => (row as HTMLElement).dataset.kind));
    expect(shown).toEqual(all.map((one) => one.kind));
    // The generator's own list of errors: AN-1 missed a branch, AN-2 exchanged two tails; against AN-1 the branch is extra.
    expect(shown).toEqual(expect.arrayContaining(["exchanged-tails", "extra-branch"]));
    const value = (label: string) => page.getByRole("button", { name: label }).locator(".number-value").textContent();
    expect(await value("edit distance")).toBe(`${expected.whole.ged.toFixed(2)}, proven`);
    expect(await value("of A's cost")).toBe(expected.whole.normalised.reference!.toFixed(3));
    expect(await value("recall by length")).toBe(expected.whole.detection.length.recall!.toFixed(3));
  });

  it("steps by keys through all differences; section, list and strip follow", async () => {
    const { page } = open;
    const all = differenceGroups(expected, sets.get("AN-1")!, sets.get("AN-2")!).flatMap((group) => group.differences);
    for (const [k, difference] of all.entries()) {
      await page.keyboard.press("q");
      await page.locator(".difference-row").nth(k).and(page.locator('[aria-pressed="true"]')).waitFor();
      const [x, y, z] = difference.at.map((mm) => mm.toFixed(2));
      await page.getByText(`x ${x}  y ${y}  z ${z} mm`).waitFor();
      expect(await page.locator(".strip-title").textContent()).toMatch(difference.a === null ? /^B / : /^A /);
    }
    const before = await page.locator(".strip-title").textContent();
    await page.keyboard.press("Shift+T");
    await page.waitForFunction((text) => document.querySelector(".strip-title")?.textContent !== text, before);
    await page.keyboard.press("Shift+Q");
    await page
      .locator(".difference-row")
      .nth(all.length - 2)
      .and(page.locator('[aria-pressed="true"]'))
      .waitFor();
  });

  it("exports the comparison as data that equals the shared one, and as a page that needs nothing else", async () => {
    const { page } = open;
    for (const [title, ending] of [
      ["Data (.json)", ".json"],
      ["Report (.html)", ".html"],
    ] as const) {
      await page.keyboard.press("Control+e");
      await page.getByLabel(title).check();
      const download = page.waitForEvent("download");
      await page.getByRole("button", { name: "Export", exact: true }).click();
      const saved = await download;
      expect(saved.suggestedFilename()).toBe(`HB-07-AN-2-pass-1-against-AN-1-pass-1.comparison${ending}`);
      const path = join(program.folder, `saved${ending}`);
      await saved.saveAs(path);
      const text = await readFile(path, "utf8");
      if (ending === ".json") expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify(expected)));
      else expect(text).toContain("A, the reference: AN-1, pass 1.");
    }
  });

  it("explains each number at a press of its button, and hides that with Escape", async () => {
    const { page } = open;
    const number = page.getByRole("button", { name: "precision by length" });
    await number.focus();
    await page.keyboard.press("Enter");
    await page.getByText("The share of B's string length that lies within 0.5 mm of a string of A.").waitFor();
    await page.keyboard.press("Escape");
    await page.locator("#number-meaning").waitFor({ state: "hidden" });
  });

  it("has no serious violation in both themes, with a meaning open and on each sheet", async () => {
    const { page } = open;
    await page.getByRole("button", { name: "edit distance" }).click();
    for (const theme of ["dark", "light"]) {
      await page.evaluate((name) => {
        document.documentElement.dataset.theme = name;
      }, theme);
      expect(await seriousViolations(page), theme).toEqual([]);
      for (const key of ["?", "Control+e", "Control+o"]) {
        await page.locator(".section-view").focus();
        await page.keyboard.press(key);
        await page.locator("dialog[open]").waitFor();
        expect(await seriousViolations(page), `${key}, ${theme}`).toEqual([]);
        await page.keyboard.press("Escape");
        await page.locator("dialog[open]").waitFor({ state: "detached" });
      }
    }
  });

  it("says when the comparison cannot be made, and makes it when asked again", async () => {
    const { page } = open;
    await page.route("**/compare-worker*", (route) => route.abort());
    await page.getByLabel("merge forks below").selectOption("0.6 mm");
    await page.getByText(/^The comparison failed: /).waitFor();
    expect(await page.locator(".difference-row").count()).toBe(0);
    await page.unroute("**/compare-worker*");
    await page.getByRole("button", { name: "compare again" }).click();
    await page.locator(".difference-row").first().waitFor();
    await page.getByLabel("merge forks below").selectOption("0.3 mm");
    await page.locator(".difference-row").first().waitFor();
  });

  it("compares anew with other costs, and comes back after a reload by its address", async () => {
    const { page } = open;
    await page.getByLabel("costs").selectOption("structure");
    await page.waitForFunction(
      (before) => {
        const text = document.querySelector(".number-value")?.textContent;
        return text !== undefined && text !== before;
      },
      `${expected.whole.ged.toFixed(2)}, proven`,
      { timeout: 60_000 },
    );
    await page.reload();
    await page.locator(".difference-row").first().waitFor({ timeout: 60_000 });
    expect(open.faults).toEqual([]);
  });
});
