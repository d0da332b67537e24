import { rm } from "node:fs/promises";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { addScan, allSaved, deskReady, headLine, startPass } from "#test/browser/desk-steps.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SectionHand } from "#test/browser/section-hand.ts";
import { TRUE_NODES, TRUE_STRANDS, writeSmallScan } from "#test/browser/small-scan.ts";

describe("a program that dies while someone traces", () => {
  let first: RunningProgram;
  let second: RunningProgram | null = null;
  let open: OpenPage;

  beforeAll(async () => {
    first = await startProgram();
    open = await openPage(first.url, join(first.folder, "profile"));
    await addScan(open.page, await writeSmallScan(first.folder));
    await startPass(open.page, "AN-1");
  });
  afterAll(async () => {
    await open?.close();
    await second?.stop();
    await first?.stop();
    await rm(first.folder, { recursive: true, force: true });
  });

  it("loses no saved edit and no click: the next run has the ones and makes the others", async () => {
    const { page, context } = open;
    const hand = await SectionHand.on(page);
    await hand.click([TRUE_NODES.origin[0], TRUE_NODES.origin[1]]);
    await hand.click([TRUE_STRANDS[0]!.bend[0], TRUE_STRANDS[0]!.bend[1]]);
    await allSaved(page);
    expect(await headLine(page)).toEqual({ edits: 2, trees: 1, open: 1 });

    await first.kill();
    await hand.click([TRUE_NODES.low[0], TRUE_NODES.low[1]]);
    await hand.click([TRUE_STRANDS[2]!.bend[0], TRUE_STRANDS[2]!.bend[1]]);
    await page.getByText("2 edits waiting to be traced").waitFor({ timeout: 30_000 });
    await page.getByText("Tautline does not answer").waitFor({ timeout: 60_000 });

    const port = Number(new URL(first.url).port);
    second = await startProgram(first.folder, port);
    await page.getByText("Tautline was started anew").waitFor({ timeout: 60_000 });
    const next = await context.newPage();
    await next.goto(second.url);
    await next.getByRole("button", { name: /^Open.*AN-1, pass 1/ }).click();
    await deskReady(next);
    await allSaved(next);
    expect(await headLine(next)).toEqual({ edits: 4, trees: 1, open: 1 });
  });
});
