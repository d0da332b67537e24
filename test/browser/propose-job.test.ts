import { spawnSync } from "node:child_process";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { addScan, allSaved, exportTreeFile, headLine, startPass } from "#test/browser/desk-steps.ts";
import { DIST, type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SectionHand } from "#test/browser/section-hand.ts";
import { SPACING_MM, TRUE_STRANDS, writeSmallScan, writeTrueTree } from "#test/browser/small-scan.ts";

/** What the note over the section says. */
const note = (page: Page, words: string) => page.locator(".section-advice", { hasText: words });
const FOLLOWED_MS = 120_000;

interface Comparison {
  readonly whole: {
    readonly distances: { readonly aToB: number };
    readonly detection: { readonly length: { readonly recall: number } };
  };
}

describe("a proposed string in the real page", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let page: Page;
  let hand: SectionHand;
  const middleOf = (index: number) => [TRUE_STRANDS[index]!.bend[0], TRUE_STRANDS[index]!.bend[1]] as const;

  beforeAll(async () => {
    program = await startProgram();
    const scan = await writeSmallScan(program.folder);
    open = await openPage(program.url, join(program.folder, "profile"));
    ({ page } = open);
    await addScan(page, scan);
    await startPass(page, "AN-1");
    hand = await SectionHand.on(page);
  });
  afterAll(async () => {
    expect(open?.faults).toEqual([]);
    await open?.close();
    await program?.stop();
  });

  it("is shown and edits nothing; a click leaves a strand out, Escape puts all away", async () => {
    await hand.key(middleOf(0), "f");
    await note(page, "proposed:").waitFor({ timeout: FOLLOWED_MS });
    const all = Number(/proposed: (\d+) strand/.exec((await note(page, "proposed:").textContent())!)![1]);
    // The true tree has five strands.
    expect(all).toBeGreaterThanOrEqual(5);
    await hand.click(middleOf(4));
    await note(page, `proposed: ${all - 1} strand`).waitFor();
    await hand.click(middleOf(4));
    await note(page, `proposed: ${all} strand`).waitFor();
    await page.keyboard.press("Escape");
    await note(page, "proposed:").waitFor({ state: "detached" });
    expect(await headLine(page)).toEqual({ edits: 0, trees: 0, open: 0 });
  });

  it("says when there is no string", async () => {
    await hand.key([0.6, 6.6], "f");
    await page.getByText("No string was found through this place").first().waitFor({ timeout: FOLLOWED_MS });
  });

  it("is taken up to the pointer, and stays open there", async () => {
    await hand.key(middleOf(0), "f");
    await note(page, "proposed:").waitFor({ timeout: FOLLOWED_MS });
    await hand.key(middleOf(1), "Shift+G");
    await allSaved(page);
    const taken = await headLine(page);
    expect(taken).toMatchObject({ edits: 1, trees: 1, open: 1 });
    await page.keyboard.press("Control+z");
    await allSaved(page);
    expect((await headLine(page)).trees).toBe(0);
  });

  it("leaves nothing overlooked that is not listed: searched, shown one by one, set aside with a reason, proposed from", async () => {
    // Up to the pointer on the left branch: the trunk and that half are traced; what hangs on the trunk's fork came along.
    await hand.key(middleOf(0), "f");
    await note(page, "proposed:").waitFor({ timeout: FOLLOWED_MS });
    await hand.click(middleOf(2));
    await page.keyboard.press("f");
    await allSaved(page);
    await page.getByRole("tab", { name: /^Overlooked/ }).click();
    await page.getByRole("button", { name: "Search the scan" }).click();
    await page.getByText("The whole scan was searched for strings.").waitFor({ timeout: FOLLOWED_MS });
    const rows = page.locator(".side-body .finding-row");
    await rows.first().waitFor();
    // The strand left out, and the two that hung on it, are some 6 mm in one or more stretches.
    const lengths = await rows.locator(".figures").allTextContents();
    const sum = lengths.reduce((all, text) => all + Number.parseFloat(text), 0);
    expect(sum).toBeGreaterThan(4);
    expect(sum).toBeLessThan(8);
    expect(await seriousViolations(page)).toEqual([]);
    await page.locator(".section-view").focus();
    await page.keyboard.press("q");
    expect(await rows.first().getAttribute("aria-pressed")).toBe("true");
    await page.keyboard.press("Shift+X");
    await page.getByLabel(/Why is it no chorda/).fill("a suture");
    await page.getByRole("button", { name: "Dismiss", exact: true }).click();
    await page.getByText("Dismissed: a suture").waitFor();
    await page.keyboard.press("Control+z");
    await page.getByText("Dismissed: a suture").waitFor({ state: "detached" });
    await allSaved(page);
    await page.keyboard.press("q");
    await page.getByRole("button", { name: "propose the string" }).click();
    await note(page, "proposed:").waitFor({ timeout: FOLLOWED_MS });
    const before = (await headLine(page)).trees;
    await page.locator(".section-view").focus();
    await page.keyboard.press("f");
    await allSaved(page);
    // It meets the traced tree and is joined to it: no new tree.
    expect((await headLine(page)).trees).toBe(before);
    for (let i = 0; i < 2; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    expect((await headLine(page)).trees).toBe(0);
  });

  it("is taken whole by its key again: one edit, and the true tree lies on it", async () => {
    await hand.key(middleOf(0), "f");
    await note(page, "proposed:").waitFor({ timeout: FOLLOWED_MS });
    const before = (await headLine(page)).edits;
    await page.keyboard.press("f");
    await allSaved(page);
    expect(await headLine(page)).toEqual({ edits: before + 1, trees: 1, open: 0 });
    const mine = join(program.folder, "proposed.chordae.json");
    await exportTreeFile(page, mine);
    const args = [join(DIST, "main/cli.mjs"), "compare", await writeTrueTree(program.folder), mine, "--json"];
    const run = spawnSync(process.execPath, args, { encoding: "utf8" });
    expect(run.status, run.stderr).toBe(0);
    const { whole } = JSON.parse(run.stdout) as Comparison;
    expect(whole.distances.aToB).toBeLessThan(SPACING_MM);
    expect(whole.detection.length.recall).toBeGreaterThan(0.95);
  });
});
