import { cp, mkdir, readdir, readFile, truncate, writeFile } from "node:fs/promises";
import { join } from "node:path";
import type { Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { shownFromTrue, type Turn, turnedFrame } from "#shared/study/turn.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { seriousViolations } from "#test/browser/axe-violations.ts";
import { resealBag, wholeText } from "#test/browser/bag-folder.ts";
import { addScan, allSaved, deskReady, headLine } from "#test/browser/desk-steps.ts";
import { type OpenPage, openPage, type RunningProgram, startProgram } from "#test/browser/running-program.ts";
import { SectionHand } from "#test/browser/section-hand.ts";
import { TRUE_NODES, TRUE_STRANDS, writeSmallScan } from "#test/browser/small-scan.ts";
import { makeFrozenStudy, makePackets, refusalOf, takeIn, writeReturn } from "#test/browser/study-steps.ts";
import { samplePng } from "#test/main/node/study/sample-png.ts";

type Place = readonly [number, number, number];

/** What the lead's library keeps to itself, read from its disk: how each annotator sees the specimen. */
interface Drawn {
  readonly code: string;
  readonly toShown: (place: Place) => Place;
  /** The button of the plane in which the small tree lies, as shown. */
  readonly plane: "flat" | "front" | "side";
}

async function drawnFor(library: string): Promise<Map<string, Drawn>> {
  const [study] = await readdir(join(library, "studies"));
  const record = JSON.parse(await readFile(join(library, "studies", study!, "study.json"), "utf8")) as {
    assignments: { code: string; annotator: string; turn: Turn }[];
  };
  const [specimen] = await readdir(join(library, "specimens"));
  const { volume } = JSON.parse(await readFile(join(library, "specimens", specimen!, "specimen.json"), "utf8")) as {
    volume: VolumeGrid;
  };
  return new Map(
    record.assignments.map(({ code, annotator, turn }) => {
      const frame = turnedFrame(volume, turn);
      const plane = (["side", "front", "flat"] as const)[turn.axes.indexOf(2)]!;
      return [annotator, { code, plane, toShown: (place) => shownFromTrue(frame, place) }];
    }),
  );
}

/** SHA-256 of the only specimen's stored voxels. */
async function scanHash(library: string): Promise<string> {
  const [specimen] = await readdir(join(library, "specimens"));
  const text = await readFile(join(library, "specimens", specimen!, "specimen.json"), "utf8");
  return (JSON.parse(text) as { volume: { sha256: string } }).volume.sha256;
}

/** Traces the trunk and both upper branches; with `all`, the left branch too. */
async function traceTree(page: Page, { plane, toShown }: Drawn, all: boolean): Promise<void> {
  await page.getByRole("button", { name: plane, exact: true }).click();
  await page.waitForTimeout(1500);
  const hand = await SectionHand.on(page);
  const node = (name: keyof typeof TRUE_NODES) => toShown(TRUE_NODES[name]);
  const bend = (index: number) => toShown(TRUE_STRANDS[index]!.bend);
  await hand.click(node("origin"));
  await hand.click(bend(0));
  await hand.click(node("low"));
  await hand.click(bend(2));
  await hand.click(node("high"));
  await hand.click(bend(3));
  await hand.key(node("middle"), "i");
  await hand.key(node("high"), "b");
  await hand.click(bend(4));
  await hand.key(node("right"), "i");
  if (!all) return;
  await hand.key(node("low"), "b");
  await hand.click(bend(1));
  await hand.key(node("left"), "i");
}

describe("an agreement study, from the lead to the annotator and back", () => {
  let lead: { program: RunningProgram; open: OpenPage };
  let annotator: { program: RunningProgram; open: OpenPage };
  let out: string;
  let packets: Map<string, string>;
  let drawn: Map<string, Drawn>;
  let returned: string;
  /** Every answer in words that the annotator's window was given. */
  const heard: string[] = [];
  /** What must not reach an annotator: names, and the hash of the scan itself. */
  let kept: readonly string[];

  const inBothThemes = async (page: Page, where: string) => {
    for (const theme of ["light", "dark"]) {
      await page.evaluate((name) => {
        document.documentElement.dataset.theme = name;
      }, theme);
      expect(await seriousViolations(page), `${where}, ${theme}`).toEqual([]);
    }
  };

  beforeAll(async () => {
    const start = async (): Promise<{ program: RunningProgram; open: OpenPage }> => {
      const program = await startProgram();
      return { program, open: await openPage(program.url, join(program.folder, "profile")) };
    };
    lead = await start();
    annotator = await start();
    annotator.open.page.on("response", (answer) => {
      // An answer that the page let go of never gives its text: nobody waits for it.
      const isWords = answer.headers()["content-type"]?.includes("application/json");
      if (isWords)
        void answer.text().then(
          (text) => heard.push(text),
          () => undefined,
        );
    });
    out = join(lead.program.folder, "stick");
    await mkdir(join(out, "back"), { recursive: true });
  });
  afterAll(async () => {
    for (const side of [lead, annotator]) {
      await side?.open.close();
      await side?.program.stop();
    }
  });

  it("is made by the lead, who freezes its protocol; two assignments go out", async () => {
    const { page } = lead.open;
    await addScan(page, await writeSmallScan(lead.program.folder));
    await page.getByRole("button", { name: /^New pass/ }).waitFor({ timeout: 60_000 });
    await makeFrozenStudy(page, "Harrow Bay agreement", ["small-tree"], ["AN-1", "AN-2"], samplePng("AN-1"));
    await page.getByText("Next: make packets").waitFor();
    const paths = await makePackets(page, out);
    expect(paths).toHaveLength(2);
    drawn = await drawnFor(lead.program.library);
    kept = ["small-tree", "Harrow Bay", "AN-1", "AN-2", await scanHash(lead.program.library)];
    packets = new Map([...drawn].map(([name, { code }]) => [name, paths.find((path) => path.includes(code))!] as const));
    for (const path of packets.values()) {
      const text = await wholeText(path);
      for (const word of kept) expect(text).not.toContain(word);
    }
    await page.locator(".pass-cell").first().getByText("out", { exact: true }).waitFor();
  });

  it("stands on the annotator's shelf as a code, and opens on the desk with its rules", async () => {
    const { page } = annotator.open;
    await takeIn(page, packets.get("AN-1")!);
    await page.getByRole("heading", { name: "Taken in" }).waitFor({ timeout: 60_000 });
    await page.getByRole("button", { name: "Done" }).click();
    const { code } = drawn.get("AN-1")!;
    await page.getByRole("heading", { name: new RegExp(code) }).waitFor();
    await inBothThemes(page, "shelf with an assignment");
    await page.getByRole("button", { name: `Open assignment ${code}` }).click();
    await deskReady(page);
    await page.getByRole("button", { name: "Rules", exact: true }).click();
    await page.getByText("The last cross-section whose outline is separate from muscle.").waitFor();
    await page.getByRole("img", { name: "Still picture: origin" }).waitFor();
    await inBothThemes(page, "rules");
    await page.keyboard.press("Escape");
    const text = await page.evaluate(() => document.body.textContent);
    for (const word of kept) expect(text).not.toContain(word);
  });

  it("is not handed back with an open end without that end being named, and the lead refuses it", async () => {
    const { page } = annotator.open;
    await traceTree(page, drawn.get("AN-1")!, true);
    // One more branch, left where the last pin is.
    const hand = await SectionHand.on(page);
    const { toShown } = drawn.get("AN-1")!;
    await hand.key(toShown(TRUE_STRANDS[0]!.bend), "b");
    await hand.click(toShown([2.6, 5.1, 1.2]));
    await page.keyboard.press("Escape");
    await allSaved(page);
    await page.getByRole("button", { name: "Hand it back" }).click();
    await page.getByRole("heading", { name: "1 end still open" }).waitFor();
    expect(await page.getByRole("list", { name: "Open ends" }).textContent()).toMatch(/, node n\d+/);
    await inBothThemes(page, "open ends");
    await page.getByRole("button", { name: "Hand it back as it is" }).click();
    await page.getByText(/^1.end in this pass is still open/).waitFor();
    await inBothThemes(page, "hand back");
    const path = await writeReturn(page, join(out, "back"), true);
    expect(await refusalOf(lead.open.page, path)).toMatch(
      new RegExp(`^${drawn.get("AN-1")!.code} has 1 open end: .*\\(n\\d+\\)\\. It was not taken in`),
    );
  });

  it("is mended, handed back again, and taken in as a pass in the lead's own frame", async () => {
    const { page } = annotator.open;
    const { code } = drawn.get("AN-1")!;
    await page.getByRole("button", { name: `Open it again to mend it ${code}` }).click();
    await deskReady(page);
    await page.locator(".section-view").focus();
    for (let k = 0; k < 6 && (await headLine(page)).open > 0; k++) {
      await page.keyboard.press("Control+z");
      await allSaved(page);
    }
    await page.getByRole("button", { name: "Hand it back" }).click();
    await mkdir(join(out, "mended"));
    returned = await writeReturn(page, join(out, "mended"));
    await takeIn(lead.open.page, returned);
    await lead.open.page.getByRole("heading", { name: "Taken in" }).waitFor({ timeout: 30_000 });
    await lead.open.page.getByRole("button", { name: "To the study" }).click();
    await lead.open.page.locator(".pass-cell", { hasText: "returned" }).click();
    await lead.open.page.getByText("1 tree, 0 open ends, 0 doubts").waitFor();
  });

  it("changes nothing when the very same packet comes again", async () => {
    const { page } = lead.open;
    await takeIn(page, returned);
    await page.getByRole("heading", { name: "This packet was taken in before" }).waitFor({ timeout: 30_000 });
    await page.getByText("Nothing was changed.").waitFor();
    await page.getByRole("button", { name: "Done" }).click();
  });

  it("refuses packets that were tampered with, cut off, doubled, or written by a newer version, each with its sentence", async () => {
    const { page } = lead.open;
    const spoilt = async (name: string, spoil: (folder: string) => Promise<void>) => {
      const folder = join(out, name);
      await cp(returned, folder, { recursive: true });
      await spoil(folder);
      return refusalOf(page, folder);
    };
    const journal = (folder: string) => join(folder, "data", "journal.jsonl");
    const tampered = await spoilt("tampered", async (folder) => {
      const text = await readFile(journal(folder), "utf8");
      await writeFile(journal(folder), text.replace(/"label":"[A-Z]/, '"label":"~'));
    });
    expect(tampered).toMatch(/^tampered .*journal\.jsonl.*: expected .*, found /s);
    const cut = await spoilt("cut", (folder) => truncate(journal(folder), 700));
    expect(cut).toMatch(/^cut .*: expected .*, found /s);
    // Resealed: its checksums agree, and still no edit can be taken out of the log's own chain.
    const chain = await spoilt("chain", async (folder) => {
      const lines = (await readFile(journal(folder), "utf8")).split("\n");
      lines.splice(3, 1);
      await writeFile(journal(folder), lines.join("\n"));
      await resealBag(folder);
    });
    expect(chain).toMatch(/journal\.jsonl.*: expected .*, found /s);
    const newer = await spoilt("newer", async (folder) => {
      const path = join(folder, "data", "packet.json");
      const packet = JSON.parse(await readFile(path, "utf8")) as { version: number };
      await writeFile(path, JSON.stringify({ ...packet, version: packet.version + 1 }));
      await resealBag(folder);
    });
    expect(newer).toMatch(/version 1, found version 2/);
    expect(newer).toMatch(/made by another version of the program/);
    const doubled = await refusalOf(page, join(out, "back", `${drawn.get("AN-1")!.code}-return`));
    expect(doubled).toMatch(/has come back already, with another log\. The pass that is here stays/);
    await page.locator(".pass-cell", { hasText: "returned" }).getByText("1\u00a0tree").waitFor();
  });

  it("ends in a report with what the two annotators drew, on screen and as files", async () => {
    const { page } = annotator.open;
    const second = drawn.get("AN-2")!;
    await takeIn(page, packets.get("AN-2")!);
    await page.getByRole("button", { name: "Open it on the desk" }).click({ timeout: 60_000 });
    await deskReady(page);
    await traceTree(page, second, false);
    await allSaved(page);
    await page.getByRole("button", { name: "Hand it back" }).click();
    const path = await writeReturn(page, out);
    const { page: desk } = lead.open;
    await takeIn(desk, path);
    await desk.getByRole("button", { name: "To the study" }).click({ timeout: 30_000 });
    await desk.getByText("Every pass is back.").waitFor();
    await desk.getByRole("tab", { name: "Report" }).click();
    const totals = desk.getByRole("table", { name: "Totals of each pass" });
    await totals.waitFor({ timeout: 60_000 });
    // By construction: three insertions against two, one origin each. Lengths within 0.3 mm of the polylines drawn.
    const rows = await totals
      .locator("tbody tr")
      .evaluateAll((list) => list.map((row) => [...row.children].map((cell) => cell.textContent)));
    expect(rows.map((row) => row.slice(0, 5))).toEqual([
      ["small-tree", "AN-1", "1", "1", "3"],
      ["small-tree", "AN-2", "1", "1", "2"],
    ]);
    await inBothThemes(desk, "report");
    for (const [button, ending] of [
      ["Save as a page (.html)", "-agreement.html"],
      ["Save the item table (.csv)", "-items.csv"],
    ] as const) {
      const download = desk.waitForEvent("download");
      await desk.getByRole("button", { name: button }).click();
      const saved = await download;
      expect(saved.suggestedFilename()).toBe(`Harrow-Bay-agreement${ending}`);
      const to = join(out, `saved${ending}`);
      await saved.saveAs(to);
      expect(await readFile(to, "utf8")).toContain("small-tree");
    }
  });

  it("has no serious violation on any of its screens, in both themes", async () => {
    const { page } = lead.open;
    for (const part of ["Passes", "Protocol", "Planning", "Effort"]) {
      await page.getByRole("tab", { name: part }).click();
      await page.waitForTimeout(300);
      await inBothThemes(page, part);
    }
    await page.getByRole("tab", { name: "Passes" }).click();
    for (const button of ["Make packets", "Take in a packet", "Specimens and annotators"]) {
      await page.getByRole("button", { name: button }).click();
      await page.waitForTimeout(300);
      await inBothThemes(page, button);
      await page.keyboard.press("Escape");
      await page.locator("dialog[open]").waitFor({ state: "detached" });
    }
    await page.getByRole("button", { name: "shelf", exact: true }).click();
    await page.getByRole("button", { name: "New study" }).click();
    await inBothThemes(page, "new study");
    await page.keyboard.press("Escape");
    await inBothThemes(page, "shelf with a study");
  });

  it("never told the annotator's window a name of the study, or the scan's own hash", () => {
    // Both assignments were worked on, so that their answers are among these.
    for (const { code } of drawn.values()) expect(heard.some((text) => text.includes(code))).toBe(true);
    for (const word of kept) expect(heard.filter((text) => text.includes(word))).toEqual([]);
  });

  it("met no fault on the way but the refusals it was made to meet", () => {
    const own = (faults: readonly string[]) => faults.filter((text) => !/status of (409|422)/.test(text));
    expect(own(lead.open.faults)).toEqual([]);
    expect(own(annotator.open.faults)).toEqual([]);
  });
});
