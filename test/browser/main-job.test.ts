import { spawnSync } from "node:child_process";
import { readdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { addScan, allSaved, deskReady, exportTreeFile, headLine, startPass } from "#test/browser/desk-steps.ts";
import { DIST, type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SectionHand } from "#test/browser/section-hand.ts";
import { SPACING_MM, TRUE_NODES, TRUE_STRANDS, writeSmallScan, writeTrueTree } from "#test/browser/small-scan.ts";

type Flat = readonly [number, number];
const place = (name: keyof typeof TRUE_NODES): Flat => [TRUE_NODES[name][0], TRUE_NODES[name][1]];
const bend = (index: number): Flat => [TRUE_STRANDS[index]!.bend[0], TRUE_STRANDS[index]!.bend[1]];

/** Traces the whole small tree as a person would: the longest way first, then a branch from each fork. */
async function traceByHand(hand: SectionHand): Promise<void> {
  await hand.click(place("origin"));
  await hand.click(bend(0));
  await hand.click(place("low"));
  await hand.click(bend(2));
  await hand.click(place("high"));
  await hand.click(bend(3));
  await hand.key(place("middle"), "i");
  await hand.key(place("low"), "b");
  await hand.click(bend(1));
  await hand.key(place("left"), "i");
  await hand.key(place("high"), "b");
  await hand.click(bend(4));
  await hand.key(place("right"), "i");
}

interface Comparison {
  readonly pairs: readonly { readonly ged: number; readonly exact: boolean }[];
  readonly whole: { readonly distances: { readonly mean: number } };
}

interface TreeFile {
  readonly trees: readonly {
    readonly strands: readonly {
      points?: readonly (readonly number[])[];
      radii?: readonly (number | null)[];
      madeBy?: unknown;
      imageFit?: number | null;
    }[];
  }[];
}

/** The program's own comparison, as a person runs it. */
function compare(truth: string, mine: string): { readonly code: number | null; readonly text: string } {
  const args = [join(DIST, "main/cli.mjs"), "compare", truth, mine, "--costs", "structure", "--json"];
  const run = spawnSync(process.execPath, args, { encoding: "utf8" });
  return { code: run.status, text: run.stdout + run.stderr };
}

describe("the main job in a real browser", () => {
  let program: RunningProgram;
  let open: OpenPage;
  let scan: string;
  let truth: string;

  beforeAll(async () => {
    program = await startProgram();
    scan = await writeSmallScan(program.folder);
    truth = await writeTrueTree(program.folder);
    open = await openPage(program.url, join(program.folder, "profile"));
  });
  afterAll(async () => {
    await open?.close();
    await program?.stop();
  });

  it("takes a scan in by its path, and a person confirms its voxel size", async () => {
    const { page } = open;
    await addScan(page, scan);
    await startPass(page, "AN-1");
    expect(await page.locator(".crumbs h1").textContent()).toBe("AN-1, pass 1");
    expect(await headLine(page)).toEqual({ edits: 0, trees: 0, open: 0 });
  });

  it("traces a tree with two forks by clicking on the section", async () => {
    const { page } = open;
    await traceByHand(await SectionHand.on(page));
    await allSaved(page);
    const { trees, open: left } = await headLine(page);
    expect({ trees, left }).toEqual({ trees: 1, left: 0 });
    // Checks follow the last edit after a moment.
    await page.getByRole("tab", { name: "Findings 0" }).click({ timeout: 10_000 });
  });

  it("undoes three edits, goes on undoing after a reload, and redoes all", async () => {
    const { page } = open;
    const before = await headLine(page);
    await page.locator(".section-view").focus();
    for (let i = 0; i < 3; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    // The last branch: its end, its pin with the fork, and the insertion of the branch before.
    expect((await headLine(page)).open).toBe(1);
    await page.reload();
    await deskReady(page);
    expect((await headLine(page)).open).toBe(1);
    for (let i = 0; i < 30; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    expect((await headLine(page)).trees).toBe(0);
    for (let i = 0; i < 30; i++) await page.keyboard.press("Control+Shift+z");
    await allSaved(page);
    expect(await headLine(page)).toEqual(before);
  });

  it("exports a tree file that compares with the true tree at no cost in structure, under one voxel away", async () => {
    const mine = join(program.folder, "mine.chordae.json");
    await exportTreeFile(open.page, mine);
    const file = JSON.parse(await readFile(mine, "utf8")) as { format: string; trees: unknown[] };
    expect(file.format).toBe("chordae-trees");
    expect(file.trees).toHaveLength(1);
    const { code, text } = compare(truth, mine);
    expect(code, text).toBe(0);
    const result = JSON.parse(text) as Comparison;
    expect(result.pairs).toHaveLength(1);
    expect(result.pairs[0]).toMatchObject({ ged: 0, exact: true });
    expect(result.whole.distances.mean).toBeLessThan(SPACING_MM);
  });

  it("is reached again, to the last bit of geometry, from the pins alone by the command line", async () => {
    const mine = JSON.parse(await readFile(join(program.folder, "mine.chordae.json"), "utf8")) as TreeFile;
    const pins = structuredClone(mine);
    for (const strand of pins.trees[0]!.strands) {
      for (const key of ["points", "radii", "madeBy", "imageFit"] as const) delete strand[key];
    }
    const pinsPath = join(program.folder, "pins.chordae.json");
    const out = join(program.folder, "again.chordae.json");
    await writeFile(pinsPath, JSON.stringify(pins));
    const [specimen] = await readdir(join(program.library, "specimens"));
    const folder = join(program.library, "specimens", specimen!);
    const run = spawnSync(process.execPath, [join(DIST, "main/cli.mjs"), "trace", folder, "--pins", pinsPath, "--out", out], {
      encoding: "utf8",
    });
    expect(run.status, run.stderr).toBe(0);
    const again = JSON.parse(await readFile(out, "utf8")) as TreeFile;
    expect(again.trees[0]!.strands.map((strand) => strand.points?.length)).toEqual(
      mine.trees[0]!.strands.map((strand) => strand.points?.length),
    );
    expect(again.trees[0]!.strands).toEqual(mine.trees[0]!.strands);
  });

  it("shows a second window the pass as it grows, for reading only", async () => {
    const { page, context } = open;
    const second = await context.newPage();
    await second.goto(page.url().replace(/#.*/, program.url.slice(program.url.indexOf("#"))));
    await second.getByRole("button", { name: /^Open.*AN-1, pass 1/ }).click();
    await second.getByText("Another window has this pass open for writing").waitFor({ timeout: 30_000 });
    const { edits } = await headLine(second);
    await page.bringToFront();
    await page.locator(".section-view").focus();
    await page.keyboard.press("Control+z");
    await allSaved(page);
    await second.bringToFront();
    await second.waitForFunction(() => document.querySelector(".counts")?.textContent?.includes("1 open"), undefined, {
      timeout: 20_000,
    });
    await second.keyboard.press("Control+z");
    expect((await headLine(second)).edits).toBe(edits);
    await second.close();
    await page.keyboard.press("Control+y");
    await allSaved(page);
  });

  it("has the whole history again after the browser's profile was lost", async () => {
    const before = await headLine(open.page);
    await open.close();
    open = await openPage(program.url, join(program.folder, "another-profile"));
    const { page } = open;
    await page.getByRole("button", { name: /^Open.*AN-1, pass 1/ }).click();
    await deskReady(page);
    expect(await headLine(page)).toEqual(before);
    await page.locator(".section-view").focus();
    for (let i = 0; i < 30; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    expect((await headLine(page)).trees).toBe(0);
  });

  it("met no fault on the way", () => {
    expect(open.faults).toEqual([]);
  });
});
