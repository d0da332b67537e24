import { spawnSync } from "node:child_process";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { allSaved, deskReady, headLine } from "#test/browser/desk-steps.ts";
import { DIST, type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SPACING_MM, TRUE_NODES, TRUE_STRANDS, writeSmallScan, writeTrueTree } from "#test/browser/small-scan.ts";

type Flat = readonly [number, number];
const place = (name: keyof typeof TRUE_NODES): Flat => [TRUE_NODES[name][0], TRUE_NODES[name][1]];
const bend = (index: number): Flat => [TRUE_STRANDS[index]!.bend[0], TRUE_STRANDS[index]!.bend[1]];

/** Presses Tab until the control with this accessible name has the focus; what a person without a pointer does. */
async function tabTo(page: Page, name: RegExp, most = 60): Promise<void> {
  for (let i = 0; i < most; i++) {
    const found = await page.evaluate(() => {
      const element = document.activeElement as HTMLElement | null;
      if (!element?.matches("button, input, select, a")) return "";
      const label = element.closest("label")?.textContent ?? "";
      return `${element.getAttribute("aria-label") ?? ""}|${element.textContent ?? ""}|${label}`;
    });
    if (found.split("|").some((text) => name.test(text.trim()))) return;
    await page.keyboard.press("Tab");
  }
  throw new Error(`no control named ${name} is reached by Tab`);
}

/** The position under the cursor, once the readout has come to rest: a busy machine shows it late. */
async function readPlace(page: Page): Promise<Flat> {
  let before = "";
  for (let i = 0; i < 50; i++) {
    await page.waitForTimeout(90);
    const text = (await page.locator(".readout").textContent()) ?? "";
    const found = /x (-?[\d.]+)\s+y (-?[\d.]+)/.exec(text);
    if (found !== null && found[0] === before) return [Number(found[1]), Number(found[2])];
    before = found?.[0] ?? "";
  }
  throw new Error("the readout gives no steady position");
}

/** Moves the keyboard cursor to a place by arrow keys alone, reading where it is from the readout. */
async function cursorTo(page: Page, target: Flat, mmPerPx: number): Promise<void> {
  for (let round = 0; round < 8; round++) {
    const now = await readPlace(page);
    const px = [0, 1].map((axis) => Math.round((target[axis]! - now[axis]!) / mmPerPx));
    if (Math.abs(px[0]!) <= 2 && Math.abs(px[1]!) <= 2) return;
    for (const axis of [0, 1] as const) {
      const key = axis === 0 ? (px[0]! > 0 ? "ArrowRight" : "ArrowLeft") : px[1]! > 0 ? "ArrowDown" : "ArrowUp";
      let left = Math.abs(px[axis]!);
      for (const [step, modifier] of [
        [32, "Shift+"],
        [4, ""],
        [1, "Alt+"],
      ] as const) {
        for (; left >= step; left -= step) await page.keyboard.press(`${modifier}${key}`);
      }
    }
  }
  throw new Error(`the cursor does not reach ${target}`);
}

/** Millimetres a pixel, from the readout before and after a step of the cursor of known length. */
async function scaleOf(page: Page): Promise<number> {
  await page.keyboard.press("ArrowRight");
  const a = await readPlace(page);
  for (let i = 0; i < 4; i++) await page.keyboard.press("Shift+ArrowRight");
  const b = await readPlace(page);
  return (b[0] - a[0]) / 128;
}

describe("the main job by the keyboard alone", () => {
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

  it("takes a scan in and starts a pass", async () => {
    const { page } = open;
    await tabTo(page, /^Add a scan$/);
    await page.keyboard.press("Enter");
    await tabTo(page, /Path of the file or folder/);
    await page.keyboard.type(scan);
    await page.keyboard.press("Enter");
    await page.getByLabel("Voxel size along x").waitFor();
    await tabTo(page, /not known yet/);
    await page.keyboard.press("ArrowDown");
    await tabTo(page, /I have checked that this voxel size is right/);
    await page.keyboard.press("Space");
    await tabTo(page, /^Take it in$/);
    await page.keyboard.press("Enter");
    await page.getByRole("button", { name: /^New pass/ }).waitFor({ timeout: 60_000 });
    await tabTo(page, /^New pass/);
    await page.keyboard.press("Enter");
    await tabTo(page, /^Annotator/);
    await page.keyboard.press("Control+a");
    await page.keyboard.type("AN-2");
    await page.keyboard.press("Enter");
    await deskReady(page);
    expect(await page.locator(".crumbs h1").textContent()).toBe("AN-2, pass 1");
  });

  it("traces the tree with a cursor on the section, undoes, reloads and redoes", async () => {
    const { page } = open;
    await page.keyboard.press("Shift+S");
    const mmPerPx = await scaleOf(page);
    const go = (target: Flat) => cursorTo(page, target, mmPerPx);
    const pin = async (target: Flat) => {
      await go(target);
      await page.keyboard.press("Enter");
    };
    const key = async (target: Flat, name: string) => {
      await go(target);
      await page.keyboard.press(name);
    };
    for (const target of [place("origin"), bend(0), place("low"), bend(2), place("high"), bend(3)]) await pin(target);
    await key(place("middle"), "i");
    await key(place("low"), "b");
    await pin(bend(1));
    await key(place("left"), "i");
    await key(place("high"), "b");
    await pin(bend(4));
    await key(place("right"), "i");
    await allSaved(page);
    const traced = await headLine(page);
    expect({ trees: traced.trees, open: traced.open }).toEqual({ trees: 1, open: 0 });
    for (let i = 0; i < 3; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    await page.reload();
    await deskReady(page);
    for (let i = 0; i < 4; i++) await page.keyboard.press("Control+z");
    await allSaved(page);
    for (let i = 0; i < 7; i++) await page.keyboard.press("Control+y");
    await allSaved(page);
    expect(await headLine(page)).toEqual(traced);
  });

  it("exports the tree, which has the true tree's structure", async () => {
    const { page } = open;
    const mine = join(program.folder, "keyboard.chordae.json");
    await page.keyboard.press("Control+e");
    await tabTo(page, /^Export$/);
    const download = page.waitForEvent("download");
    await page.keyboard.press("Enter");
    await (await download).saveAs(mine);
    const args = [join(DIST, "main/cli.mjs"), "compare", truth, mine, "--costs", "structure", "--json"];
    const run = spawnSync(process.execPath, args, { encoding: "utf8" });
    expect(run.status, run.stderr).toBe(0);
    const result = JSON.parse(run.stdout) as {
      pairs: { ged: number; exact: boolean }[];
      whole: { distances: { mean: number } };
    };
    expect(result.pairs).toHaveLength(1);
    expect(result.pairs[0]).toMatchObject({ ged: 0, exact: true });
    expect(result.whole.distances.mean).toBeLessThan(SPACING_MM);
  });
});
